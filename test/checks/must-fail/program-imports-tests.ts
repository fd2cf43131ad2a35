// src-core/model/wrong-test.ts | layers | program-never-tests
export { loadCase } from '../../test/support/case';
