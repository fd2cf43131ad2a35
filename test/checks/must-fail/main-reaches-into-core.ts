// src-main/print/wrong-core.ts | layers | main-sees-core-by-its-doors
import type { Fitted } from '@core/estimate/fitted';
export type Wrong = Fitted;
