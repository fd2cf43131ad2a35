// src-core/numbers/wrong-algebra.ts | layers | core-numbers-looks-down-the-ladder
export { leastSquares } from '../algebra/least-squares';
