// src-core/evidence/wrong-matrix.ts | layers | one-importer-of-ml-matrix
export { Matrix } from 'ml-matrix';
