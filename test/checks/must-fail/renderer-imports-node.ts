// src-renderer/wrong-node.ts | layers | renderer-knows-no-node
export { join } from 'node:path';
