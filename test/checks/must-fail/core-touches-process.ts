// src-core/numbers/wrong-process.ts | types | TS2591
export const wrong = process.pid;
