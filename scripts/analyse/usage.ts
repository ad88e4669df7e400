/** A sentence for the person at the terminal: the command could not be understood. */
export class UsageError extends Error {}

export const usage =
  "npm run -s analyse -- FILE... --lamp Hg,Ar [--range 200:850] [--prior COEFFS.json] [--axis pixel|nm|cm-1|step] " +
  "[--full-scale 65535] [--scans 1] [--channel NAME] [--decimal .|,] [--inverted yes|no] [--kind emission|absorption] " +
  "[--bands CERTIFICATE.csv --bandwidth 1] [--tolerance 0.5] [--rule simple|guarded] [--read-only] [--json]";
