/** The part of ml-regression that the core uses; the package brings no types. */
declare module "ml-regression" {
  export class TheilSenRegression {
    constructor(x: readonly number[], y: readonly number[]);
    slope: number;
    intercept: number;
  }
}
