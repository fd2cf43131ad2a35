import { fitStructure } from '@core/estimate/fit';
import type { Design } from '@core/model/design';
import { joinParts } from '@core/model/structure-join';
import { fromDoubles } from '@core/numbers/decimals';
import { type Random, seeded } from '@core/numbers/random';
import { readSource } from '@main/intake/read-source';

export { createProject } from '@main/project/project';

function designOf(random: Random, cells: number, terms: number): Design {
  const columns = Array.from({ length: terms }, (_, j) =>
    fromDoubles(Float64Array.from({ length: cells }, () => (j === 0 ? 1 : random.normal()))),
  );
  return { names: columns.map((_, j) => `x${j}`), columns, termOf: columns.map((_, j) => j - 1), intercept: true };
}

/** Cells of sizes 5 to 1,000 with a between-cell component, and the fit of them by one method. */
function prepared(cells: number, terms: number, between: boolean): () => void {
  const random = seeded(1);
  const design = designOf(random, cells, terms);
  const sizes = Float64Array.from({ length: cells }, () => Math.round(5 + 995 * random.uniform() * random.uniform()));
  const response = fromDoubles(sizes.map((m) => random.normal() + (8 / Math.sqrt(m)) * random.normal()));
  const inverse = sizes.map((m) => 1 / m);
  const structure = joinParts({
    cells,
    sampling: { kind: 'per-size', scale: 'free', at: () => inverse, slopeAt: null },
    between: between ? 'last' : 'none',
    fixed: {},
  });
  return () => {
    const fitted = fitStructure({
      response,
      design,
      structure,
      estimate: { method: between ? 'restricted' : 'least-squares' },
    });
    if (!fitted.ok) throw new Error(JSON.stringify(fitted.problems));
  };
}

export const prepareFit = (cells: number, terms: number) => prepared(cells, terms, false);
export const prepareLikelihoodFit = (cells: number, terms: number) => prepared(cells, terms, true);

/** A comma-separated table of labels and nine numbers a row. */
export function tableText(rows: number): string {
  const random = seeded(2);
  const lines = ['label,n,y,x1,x2,x3,x4,x5,x6,x7'];
  for (let g = 0; g < rows; g++) {
    const numbers = Array.from({ length: 8 }, () => random.normal().toFixed(3));
    lines.push(`cell ${g},${1 + Math.floor(1000 * random.uniform())},${numbers.join(',')}`);
  }
  return `${lines.join('\n')}\n`;
}

export function importTable(bytes: Uint8Array): void {
  const read = {
    encoding: null,
    delimiter: null,
    decimal: null,
    group: null,
    statuses: {},
    missing: {},
    footnotes: [],
  };
  const table = readSource({ file: 'cells.csv', bytes, read });
  if (!table.ok) throw new Error(JSON.stringify(table.problems));
}

/** A whole job: a plan with rivals and a table of cells. */
export function jobText(cells: number): { plan: string; data: string } {
  const plan = {
    format: 'steelyard-plan/1',
    data: { file: 'cells.csv' },
    roles: { label: ['label'], outcome: 'y', size: 'n' },
    terms: [{ column: 'x1' }, { column: 'x2' }, { column: 'x3' }],
    variance: { parts: [{ kind: 'per-size' }, { kind: 'between' }] },
    beside: ['constant', 'per-size'],
  };
  return { plan: JSON.stringify(plan), data: tableText(cells) };
}
