// src-main/command/wrong-analyse.ts | layers | only-the-engine-analyses
export { analyse } from '@core/analyse';
