// src-core/report/wrong-date.ts | lint | core-takes-its-functions-from-numbers
export const wrong = new Date();
