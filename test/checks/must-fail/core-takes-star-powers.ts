// src-core/model/wrong-stars.ts | lint | core-takes-its-functions-from-numbers
export const wrong = (x: number) => x ** 2;
