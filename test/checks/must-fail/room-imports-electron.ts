// src-main/engine/wrong-electron.ts | layers | electron-stays-in-the-shell
export { app } from 'electron';
