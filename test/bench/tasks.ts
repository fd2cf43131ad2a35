import { leastSquares } from '@core/algebra/least-squares';
import { fitStructure } from '@core/estimate/fit';
import { plainScores } from '@core/inference/cluster-rows';
import { clusteredError, spreadingOf } from '@core/inference/clustered';
import { directionOf, unitRow } from '@core/inference/coordinates';
import { robustBeside } from '@core/inference/robust-beside';
import { wildPieces, wildTests } from '@core/inference/wild';
import { wildVectors } from '@core/inference/wild-vectors';
import { load } from '@core/kernels/kernels';
import type { Design } from '@core/model/design';
import type { Structure } from '@core/model/structure';
import { joinParts } from '@core/model/structure-join';
import { type Decimals, fromDoubles } from '@core/numbers/decimals';
import { type Random, seeded } from '@core/numbers/random';
import { sumOfSquares } from '@core/numbers/sums';
import type { Estimate } from '@core/protocol/plan';

export { load };

/** One task for this program and its peers: the same doubles, and what is asked of them. */
export interface Task {
  readonly task: string;
  readonly title: string;
  /** What the goal names: which peers, and the share of their time. */
  readonly goal: { readonly peers: readonly string[]; readonly share: number };
  readonly times: number;
  readonly threads?: number;
  readonly data: () => Readonly<Record<string, readonly Float64Array[]>>;
  /** The numbers that the peers find as well, in their order. */
  readonly ours: () => Float64Array;
}

interface Drawn {
  readonly columns: readonly Decimals[];
  readonly y: Decimals;
  readonly sizes: Float64Array;
}

/** An intercept and normal columns; sizes of 5 to 1,000; the response with an error per size and one between cells. */
function drawn(cells: number, terms: number, between: number): Drawn {
  const random: Random = seeded(cells + terms);
  const columns = Array.from({ length: terms }, (_, j) =>
    Float64Array.from({ length: cells }, () => (j === 0 ? 1 : random.normal())),
  );
  const sizes = Float64Array.from({ length: cells }, () => Math.round(5 + 995 * random.uniform() * random.uniform()));
  const y = sizes.map((n, g) => {
    let mean = between * random.normal() + (8 / Math.sqrt(n)) * random.normal();
    for (const [j, column] of columns.entries()) mean += (column[g] as number) / (1 + j);
    return mean;
  });
  return { columns: columns.map(fromDoubles), y: fromDoubles(y), sizes };
}

const dataOf = ({ columns, y, sizes }: Drawn) => ({ x: columns.map((c) => c.high), y: [y.high], n: [sizes] });

function lazily<T>(make: () => T): () => T {
  let made: { readonly value: T } | null = null;
  return () => {
    made ??= { value: make() };
    return made.value;
  };
}

function least(cells: number, terms: number, times: number): Task {
  const all = lazily(() => drawn(cells, terms, 0));
  return {
    task: 'wls',
    title: `weighted least squares ${cells} x ${terms}`,
    goal: { peers: ['scipy qr', 'LAPACK dgels', 'R lm.wfit', 'statsmodels WLS'], share: 0.8 },
    times,
    data: () => dataOf(all()),
    ours: () => {
      const { columns, y, sizes } = all();
      const solved = leastSquares({ columns, y, variances: sizes.map((n) => 1 / n) });
      if ('dependent' in solved) throw new Error('dependent');
      const scale = sumOfSquares(solved.whitened) / (cells - terms);
      const errors = solved.gramInverse.map((row, j) => Math.sqrt((row[j] as number) * scale));
      return Float64Array.from([...solved.solution, ...errors]);
    },
  };
}

function designOf({ columns }: Drawn): Design {
  return { names: columns.map((_, j) => `x${j}`), columns, termOf: columns.map((_, j) => j - 1), intercept: true };
}

function fitOf(from: Drawn, structure: Structure, estimate: Estimate) {
  const fitted = fitStructure({ response: from.y, design: designOf(from), structure, estimate });
  if (!fitted.ok) throw new Error(JSON.stringify(fitted.problems));
  return fitted.value;
}

function likelihood(cells: number, terms: number, times: number): Task {
  const all = lazily(() => drawn(cells, terms, 0.3));
  return {
    task: 'likelihood',
    title: `tau^2 + sigma^2/n by restricted likelihood, ${cells} x ${terms}`,
    goal: { peers: ['R, optimize over lm.wfit'], share: 0.05 },
    times,
    data: () => dataOf(all()),
    ours: () => {
      const inverse = all().sizes.map((n) => 1 / n);
      const structure = joinParts({
        cells,
        sampling: { kind: 'per-size', scale: 'free', at: () => inverse, slopeAt: null },
        between: 'last',
        fixed: {},
      });
      const fitted = fitOf(all(), structure, { method: 'restricted' });
      return Float64Array.from([...fitted.coefficients, ...fitted.theta]);
    },
  };
}

function robust(cells: number, terms: number, times: number): Task {
  const all = lazily(() => drawn(cells, terms, 0));
  return {
    task: 'hc3',
    title: `HC3 ${cells} x ${terms}, with its fit`,
    goal: { peers: ['numpy'], share: 0.5 },
    times,
    data: () => dataOf(all()),
    ours: () => {
      const structure = joinParts({
        cells,
        sampling: { kind: 'constant', scale: 'free', at: () => new Float64Array(cells).fill(1), slopeAt: null },
        between: 'none',
        fixed: {},
      });
      const fitted = fitOf(all(), structure, { method: 'least-squares' });
      return Float64Array.from([...fitted.coefficients, ...robustBeside(fitted).map(({ se }) => se as number)]);
    },
  };
}

/** Cells in clusters of equal size, side by side. */
function inClusters(cells: number, terms: number, count: number) {
  const from = drawn(cells, terms, 0);
  const clusterOf = Int32Array.from({ length: cells }, (_, g) => Math.floor((g * count) / cells));
  const first = Array.from({ length: count }, (_, b) => Math.ceil((b * cells) / count));
  return { from, clusters: { by: ['cluster'], clusterOf, count, first } };
}

function solvedPlainly({ columns, y }: Drawn) {
  const solved = leastSquares({ columns, y, variances: null });
  if ('dependent' in solved) throw new Error('dependent');
  const { solution, basis, inverse, whitened } = solved;
  return { solution, coordinates: { basis, inverse, residuals: whitened } };
}

function clustered(correction: 'CR1' | 'CR2', goal: Task['goal'], times: number): Task {
  const [cells, terms, count] = [1_000_000, 5, 100_000];
  const all = lazily(() => inClusters(cells, terms, count));
  return {
    task: correction.toLowerCase(),
    title: `${correction} ${cells} x ${terms} in ${count} clusters, with its fit`,
    goal,
    times,
    data: () => ({ ...dataOf(all().from), cluster: [Float64Array.from(all().clusters.clusterOf)] }),
    ours: () => {
      const { solution, coordinates } = solvedPlainly(all().from);
      const spreading = spreadingOf({ coordinates, groupings: [all().clusters], correction });
      if (!spreading) throw new Error('no spreading');
      const errors = solution.map(
        (_, j) => clusteredError(spreading, directionOf(coordinates, unitRow(terms, j))) as number,
      );
      return Float64Array.from([...solution, ...errors]);
    },
  };
}

/** The bootstrap of the last coefficient alone; p values agree as far as 9,999 draws of different generators can. */
function wild(cells: number, terms: number, count: number, times: number): Task {
  const all = lazily(() => inClusters(cells, terms, count));
  return {
    task: 'wild',
    title: `wild cluster bootstrap of 9,999, ${cells} cells in ${count} clusters, with its fit`,
    goal: { peers: ['numpy, on scores'], share: 0.7 },
    times,
    data: () => ({ ...dataOf(all().from), cluster: [Float64Array.from(all().clusters.clusterOf)] }),
    ours: () => {
      const { solution, coordinates } = solvedPlainly(all().from);
      const { clusters } = all();
      const pieces = wildPieces(coordinates, clusters, plainScores(coordinates, clusters));
      const direction = directionOf(coordinates, unitRow(terms, terms - 1));
      const tests = [{ direction, distance: solution[terms - 1] as number }];
      const vectors = wildVectors({ clusters: count, replications: 9999, seed: 1 });
      const [told] = wildTests(pieces, tests, { vectors, stop: () => false });
      return Float64Array.of(told?.p ?? Number.NaN);
    },
  };
}

/** One block of all cells: correlations of .3^|i - j| times the roots of uneven variances, given as a full matrix. */
function givenMatrix(cells: number, terms: number, times: number): Task {
  const all = lazily(() => drawn(cells, terms, 0));
  const matrix = lazily(() => {
    const { sizes } = all();
    const powers = Float64Array.from({ length: cells }, (_, lag) => 0.3 ** lag);
    const entries = new Float64Array(cells * cells);
    for (let i = 0; i < cells; i++)
      for (let j = 0; j < cells; j++)
        entries[i * cells + j] =
          (powers[Math.abs(i - j)] as number) / Math.sqrt((sizes[i] as number) * (sizes[j] as number));
    return entries;
  });
  return {
    task: 'matrix',
    title: `given matrix of ${cells} cells, ${terms} columns`,
    goal: { peers: ['LAPACK Cholesky and QR'], share: 2 },
    times,
    data: () => ({ ...dataOf(all()), v: [matrix()] }),
    ours: () => {
      const { columns, y } = all();
      const cellsOf = Int32Array.from({ length: cells }, (_, g) => g);
      const diagonal = Float64Array.from(cellsOf, (g) => matrix()[g * cells + g] as number);
      const covariance = { diagonal, blocks: [{ cells: cellsOf, matrix: matrix() }] };
      const solved = leastSquares({ columns, y, covariance });
      if ('dependent' in solved) throw new Error('dependent');
      return Float64Array.from([
        ...solved.solution,
        ...solved.gramInverse.map((row, j) => Math.sqrt(row[j] as number)),
      ]);
    },
  };
}

export const tasks: readonly Task[] = [
  least(100_000, 10, 7),
  least(1_000_000, 10, 3),
  least(1_000_000, 50, 2),
  least(100_000, 200, 2),
  likelihood(100_000, 5, 3),
  likelihood(1_000_000, 5, 2),
  robust(1_000_000, 10, 3),
  givenMatrix(2000, 10, 5),
  clustered('CR1', { peers: ['numpy CR1'], share: 0.5 }, 3),
  clustered('CR2', { peers: ['numpy CR2, cluster by cluster'], share: 0.15 }, 1),
  wild(10_000, 5, 200, 5),
];
