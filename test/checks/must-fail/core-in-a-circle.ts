// src-core/words/wrong-circle.ts | layers | no-circle
export * from './wrong-circle';
