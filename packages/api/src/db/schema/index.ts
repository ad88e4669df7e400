/** Every table. One file a capability. */
export * from "./labs.ts";
export * from "./people.ts";
export * from "./auth.ts";
export * from "./records.ts";
export * from "./mail.ts";
export * from "./idempotency.ts";
export * from "./procedures.ts";
export * from "./instruments.ts";
export * from "./sources.ts";
export * from "./checks.ts";
export * from "./captures.ts";
export * from "./analyses.ts";
export * from "./alerts.ts";
export * from "./impact.ts";
