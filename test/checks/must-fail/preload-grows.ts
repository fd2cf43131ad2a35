// src-main/preload.ts | layers | preload-is-tiny
export { exitStatusOf } from '@core/protocol/problems';
