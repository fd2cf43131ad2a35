// src-core/table/wrong-type-only.ts | layers | core-table-looks-down-the-ladder
import type { Fitted } from '../estimate/fitted';
export type Wrong = Fitted;
