// src-main/command/wrong-screen.ts | layers | main-never-renderer
export * from '../../src-renderer/main';
