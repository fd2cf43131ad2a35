export { chiSquareLower, chiSquareQuantile, chiSquareUpper, chiSquareUpperQuantile } from './chi-square';
export { fLower, fQuantile, fUpper, fUpperQuantile } from './fisher';
export { noncentralChiSquareUpper, noncentralFUpper, noncentralTUpper } from './noncentral';
export {
  noncentralChiSquareUpperQuantile,
  noncentralFUpperQuantile,
  noncentralTUpperQuantile,
} from './noncentral-quantiles';
export {
  normalDensity,
  normalLower,
  normalQuantile,
  normalTwoSided,
  normalUpper,
  normalUpperQuantile,
} from './normal';
export { tLower, tQuantile, tTwoSided, tUpper, tUpperQuantile } from './student';
