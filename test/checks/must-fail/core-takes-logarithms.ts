// src-core/estimate/wrong-log.ts | lint | core-takes-its-functions-from-numbers
export const wrong = (x: number) => Math.log(x);
