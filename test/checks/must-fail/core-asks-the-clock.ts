// src-core/report/wrong-clock.ts | lint | core-takes-its-functions-from-numbers
export const wrong = Date.now();
