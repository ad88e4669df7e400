/** Seeded simulations with known truth, for tests and for the demo lab; never part of the measuring front door. */
export * from "./random.ts";
export * from "./true-axis.ts";
export * from "./profile.ts";
export * from "./write-capture.ts";
export * from "./simulate-capture.ts";
export * from "./instruments.ts";
