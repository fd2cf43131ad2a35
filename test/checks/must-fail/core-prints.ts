// src-core/table/wrong-console.ts | types | TS2584
console.log('wrong');
