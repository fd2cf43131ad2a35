// src-renderer/wrong-main.ts | layers | renderer-never-main
export { openWindow } from '../src-main/window';
