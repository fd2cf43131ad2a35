// Kernels: columns in one memory, worked on in chunks of rows. Each has a twin in TypeScript that gives the same bits.
export { factorLower } from './cholesky';
export { joinTriangles, reduceChunks, reduceGroups, settleAt } from './reduce';
export { joinPairs, residualChunks, settleChunks, weightChunks } from './refine';
export { joinSums, timesChunks } from './products';
