// src-renderer/wrong-core.ts | layers | renderer-sees-plain-shapes
import type { Fitted } from '@core/estimate/fitted';
export type Wrong = Fitted;
