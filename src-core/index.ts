/** What src-main takes of core besides plain shapes and words. The path itself is analyse.ts, for the engine alone. */
export { checkModel } from './inference/check-model';
export { invited as invitedToKernels, load as loadKernels } from './kernels/kernels';
export { helpWith as helpWithKernels, type Invitation } from './kernels/team';
export { readPlan } from './protocol/read';
export { type EditionFacts, type NoteFacts, reportOf } from './report/report-of';
export { type Declarations, declarationsFor, isSetAside, withoutMarks } from './table/declarations';
export { lookAtCells } from './table/look';
export { groupMarks, plainNumberIn, trimmed } from './table/number-text';
export { filesOf } from './table/plan-files';
export { prepareCells } from './table/prepare-cells';
export { replaceData } from './table/replace-data';
