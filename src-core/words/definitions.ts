import type { MarginNote } from '../protocol/document';

/** Short definitions, set in the margin beside what they explain. */
export const definitions = {
  errorVariance: {
    about: 'Error variance',
    text: 'of a cell: how far its printed value would spread, over repetitions, around what the terms say of it. Its inverse is the cell’s weight.',
  },
  between: {
    about: 'Between cells',
    text: 'τ²: what sets cells apart beyond the terms and beyond sampling. More respondents do not make it smaller.',
  },
  coefficient: {
    about: 'How to read a line',
    text: 'estimate and interval first; then error, reference distribution with its degrees of freedom, ratio (estimate over error) and p.',
  },
  price: {
    about: 'Price',
    text: 'how much larger a coefficient’s variance is under a rival’s weights, if the structure named is true. Never negative.',
  },
  claimed: {
    about: 'Claimed error',
    text: 'what the rival’s usual formula reports on these data; the actual error is what its weights deliver under the stated structure.',
  },
  breakEven: {
    about: 'Break-even',
    text: 'the intraclass share at which equal weights and weights by size are equally precise. Above it equal weights win, below it weights by size.',
  },
  departure: {
    about: 'Smallest departure',
    text: 'the least violation that the test would have found with 80 % chance. A test that does not reject says no more than that.',
  },
  pull: {
    about: 'Pull',
    text: 'the factor with which a cell’s value enters a coefficient: how far the coefficient moves when the cell’s value moves by one.',
  },
  leverage: {
    about: 'Leverage',
    text: 'how far a cell’s fitted value follows its own observed value, from 0 to 1. Leverages add up to the number of coefficients.',
  },
  cook: {
    about: 'Cook’s distance',
    text: 'how far all fitted values move when the cell is left out, in units of their own uncertainty.',
  },
  supported: {
    about: 'Supported',
    text: 'exponents that a likelihood-ratio test at the plan’s level does not reject.',
  },
  threeIntervals: {
    about: 'Three intervals',
    text: 'for the fitted mean; for the true mean of a new cell (adds τ²); for its observed mean (adds its sampling variance too).',
  },
  bounds: {
    about: 'Over all admissible values',
    text: 'suppressed, rounded and interval values each take every value that their limits allow, together and in every combination.',
  },
  overturn: {
    about: 'Overturn',
    text: 'the changes tried that move a coefficient most, and whether they cross zero or the difference that matters.',
  },
} as const satisfies { readonly [name: string]: MarginNote };
