// src-main/bridge/wrong-door.ts | layers | doors-never-import-each-other
export * from '../command/command';
