// src-core/estimate/wrong-main.ts | layers | core-knows-no-machine
export { openWindow } from '../../src-main/window';
