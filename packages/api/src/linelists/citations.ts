/** Where the values of the line library come from; the long form, with what was checked, is docs/line-list.md. */
export const lineSourceCitations: { key: string; citation: string }[] = [
  {
    key: "ASD",
    citation:
      "A. Kramida, Yu. Ralchenko, J. Reader and NIST ASD Team, NIST Atomic Spectra Database, version 5.12 (2024), doi 10.18434/T4W30F",
  },
  {
    key: "SSR96",
    citation:
      "C. J. Sansonetti, M. L. Salit, J. Reader, Wavelengths of spectral lines in mercury pencil lamps, Appl. Opt. 35, 74 (1996), through the database",
  },
  { key: "SSR96-K", citation: "The same paper, table 2, as quoted by a public arc-line table" },
  { key: "DERIVED", citation: "Deuterium from hydrogen by the ratio of reduced masses" },
  { key: "ASD-RITZ", citation: "Computed from energy levels of the NIST Atomic Spectra Database" },
  { key: "CIPM07", citation: "Recommendation 2 of the 96th CIPM (2007): unstabilised helium-neon laser" },
  { key: "MEP633", citation: "CIPM mise en pratique, iodine-stabilised helium-neon laser at 633 nm (2003)" },
  {
    key: "PR72",
    citation:
      "E. R. Peck, K. Reeder, Dispersion of air, J. Opt. Soc. Am. 62, 958 (1972): conversion between vacuum and standard air",
  },
  { key: "MEMORY", citation: "From memory, not read in any source: listed, never used to judge anything" },
];
