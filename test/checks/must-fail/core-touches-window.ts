// src-core/words/wrong-window.ts | types | TS2304
export const wrong = window;
