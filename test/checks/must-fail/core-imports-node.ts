// src-core/model/wrong-node.ts | layers | core-knows-no-node
export { readFileSync } from 'node:fs';
