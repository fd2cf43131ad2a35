// src-main/project/wrong-door.ts | layers | rooms-import-no-door
export * from '../command/command';
