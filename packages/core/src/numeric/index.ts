/** Numerical ground of the measuring core: elementary functions, distributions, least squares. */
export * from "./elementary.ts";
export * from "./distributions.ts";
export * from "./linear-least-squares.ts";
export * from "./chebyshev.ts";
export * from "./levenberg-marquardt.ts";
export * from "./faddeeva.ts";
export * from "./multivariate-normal.ts";
export * from "./straight-line.ts";
export * from "./whitener.ts";
