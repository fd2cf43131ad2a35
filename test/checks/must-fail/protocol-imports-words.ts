// src-core/protocol/wrong-words.ts | layers | core-protocol-looks-down-the-ladder
export { sentence } from '../words/problems';
