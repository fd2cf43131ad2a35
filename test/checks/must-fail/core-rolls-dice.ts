// src-core/evidence/wrong-random.ts | lint | core-takes-its-functions-from-numbers
export const wrong = Math.random();
