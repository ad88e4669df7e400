/**
 * Elementary and special functions of the measuring core, bit for bit the same in Node and in every browser.
 *
 * The engines' own exp, sin and the like differ in the last digit; these are built only from + - * / and the Math
 * functions that the language defines exactly. Each file names its published methods and measured errors.
 */
export { exp, expm1, hypot, log, log10, log1p, pow } from "./exponential.ts";
export { acos, asin, atan, atan2, cos, PI, sin, tan } from "./trigonometric.ts";
export { erf, erfc, erfcx, lgamma, regularizedBeta, regularizedGammaP, regularizedGammaQ } from "./special.ts";
