import { describe } from 'vitest';
import { everyTable, tables } from './hostile-tables';

describe('hostile cells, the other half', () => {
  everyTable(tables.slice(Math.ceil(tables.length / 2)));
});
