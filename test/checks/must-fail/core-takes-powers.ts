// src-core/model/wrong-power.ts | lint | core-takes-its-functions-from-numbers
export const wrong = (x: number) => Math.pow(x, 2);
