// src-core/inference/wrong-tails.ts | layers | one-importer-of-stdlib
import exp from '@stdlib/math-base-special-exp';
export const wrong = exp;
