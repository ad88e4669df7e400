/** The grating: its equation, the instruments built on it, what a change of their error says about them, and fringes. */
export * from "./equation.ts";
export * from "./array-spectrometer.ts";
export * from "./fit-array-spectrometer.ts";
export * from "./scanning-monochromator.ts";
export * from "./range-from-optics.ts";
export * from "./modes.ts";
export * from "./diagnosis.ts";
export * from "./fringes.ts";
