import type { Structure } from '@core/model/structure';
import { joinAll } from '@core/model/structure-join';
import { type Link, levelPart, shapedPart, type VariancePart } from '@core/model/variance-part';
import { fromDoubles } from '@core/numbers/decimals';
import { log, pow } from '@core/numbers/elementary';
import { seeded } from '@core/numbers/random';
import { type Drawn, draw } from './problems';

/** Structures whose cells go together, by what ties them. */
export const linkedKinds = [
  'exchangeable',
  'serial',
  'shared',
  'shared-nested',
  'shared-crossed',
  'between-exchangeable',
  'between-serial',
  'power-exchangeable',
  'power-serial-between',
  'matrix-free',
  'matrix-between',
] as const;
export type LinkedKind = (typeof linkedKinds)[number];

export interface LinkedProblem extends Drawn {
  readonly group: Int32Array;
  readonly order: Float64Array;
}

/** A drawn problem whose cells lie in groups of uneven size, some alone, in shuffled order, with steps of 1 and 3 in an order. */
export function drawLinked(seed: number, cells: number, terms: number): LinkedProblem {
  const random = seeded(seed + 77);
  const groups = Math.max(2, Math.floor(cells / 4));
  const group = Int32Array.from({ length: cells }, () => Math.floor(groups * random.uniform() * random.uniform()));
  const reached = new Map<number, number>();
  const order = Float64Array.from(group, (b) => {
    const next = (reached.get(b) ?? 0) + (random.uniform() < 0.7 ? 1 : 3);
    reached.set(b, next);
    return next;
  });
  const effect = Float64Array.from({ length: groups }, () => 0.6 * random.normal());
  const drawn = draw(seed, cells, terms);
  const response = drawn.response.high.map((y, g) => y + (effect[group[g] as number] as number));
  return { ...drawn, response: fromDoubles(response), group, order };
}

/** What the matrix of a problem holds: two factors that cells share beside their own variance. */
export function matrixOf({ errors, group, order }: LinkedProblem): Float64Array {
  const cells = errors.length;
  return Float64Array.from({ length: cells * cells }, (_, at) => {
    const [g, h] = [Math.floor(at / cells), at % cells];
    const [s, t] = [errors[g] as number, errors[h] as number];
    const together =
      group[g] === group[h] ? 0.4 : 0.1 * Math.cos((order[g] as number) + g) * Math.cos((order[h] as number) + h);
    return g === h ? s * s : s * t * together;
  });
}

export function linkedStructure(kind: LinkedKind, problem: LinkedProblem): Structure {
  const { sizes, errors, group, order } = problem;
  const cells = sizes.length;
  const exchangeable: Link = { kind: 'exchangeable', group };
  const serial: Link = { kind: 'serial', group, order: fromDoubles(order) };
  const halves = group.map((b) => Math.floor(b / 3));
  const across = order.map((t) => t % 5);
  const shared = (by: ArrayLike<number>, name: string): VariancePart =>
    levelPart({
      kind: 'shared',
      parameter: { name: `omega2: ${name}`, role: 'shared' },
      base: new Float64Array(cells).fill(1),
      link: { kind: 'shared', group: Int32Array.from(by) },
    });
  const perSize = (link: Link | null): VariancePart =>
    levelPart({ kind: 'per-size', parameter: { name: 'phi', role: 'scale' }, base: sizes.map((n) => 10 / n), link });
  const given = levelPart({ kind: 'given', parameter: null, base: errors.map((s) => s * s), link: null });
  const between = (link: Link | null): VariancePart =>
    levelPart({
      kind: 'between',
      parameter: { name: 'tau2', role: 'between' },
      base: new Float64Array(cells).fill(1),
      link,
    });
  const power = (link: Link | null): VariancePart =>
    shapedPart(
      {
        kind: 'size-power',
        scale: 'free',
        at: (delta) => sizes.map((n) => pow(n, -delta)),
        slopeAt: (delta) => sizes.map((n) => -log(n) * pow(n, -delta)),
      },
      link,
    );
  const matrix = (free: boolean): VariancePart => {
    const entries = matrixOf(problem);
    return levelPart({
      kind: 'matrix',
      parameter: free ? { name: 'phi', role: 'scale' } : null,
      base: errors.map((s) => s * s),
      link: { kind: 'matrix', entries, inverted: true },
    });
  };
  const parts: Record<LinkedKind, VariancePart[]> = {
    exchangeable: [perSize(exchangeable)],
    serial: [perSize(serial)],
    shared: [perSize(null), shared(group, 'group')],
    'shared-nested': [perSize(null), shared(group, 'group'), shared(halves, 'half')],
    'shared-crossed': [given, shared(group, 'group'), shared(across, 'across')],
    'between-exchangeable': [perSize(null), between(exchangeable)],
    'between-serial': [given, between(serial)],
    'power-exchangeable': [power(exchangeable)],
    'power-serial-between': [power(serial), between(null)],
    'matrix-free': [matrix(true)],
    'matrix-between': [matrix(false), between(null)],
  };
  return joinAll({ parts: parts[kind], fixed: {} });
}
