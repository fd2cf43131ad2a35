import type { Table } from '../protocol/page-table';
import type { Inference } from '../protocol/plan';
import type { Coefficient, FitResult, Result } from '../protocol/result';
import { freedomText } from './coefficients';
import { count, list, number, plural } from './numbers';

/** How errors and p values beside the coefficients came about, where more than the stated structure is behind them; nothing else. */
export function inferenceSentences({ fit }: Pick<Result, 'fit'>): string[] {
  const { inference } = fit;
  switch (inference.kind) {
    case 'clustered':
      return clusteredSentences(fit, inference);
    case 'wild':
      return wildSentences(fit, inference);
    case 'kenward-roger':
      return kenwardRogerSentences(fit);
    default:
      return [];
  }
}

type Of<K extends Inference['kind']> = Extract<Inference, { kind: K }>;

function clusteredSentences(fit: FitResult, { by, alsoBy, correction }: Of<'clustered'>): string[] {
  const ways = alsoBy === null ? list(by) : `${list(by)}, or of the same ${list(alsoBy)},`;
  const start = `Errors let cells of the same ${ways} go together in any way: whitened residuals are summed by cluster (${correction}).`;
  return [start, ...(alsoBy === null ? [referenceSentence(fit, correction)] : twoWaySentences(fit))];
}

function referenceSentence({ coefficients }: FitResult, correction: string): string {
  const freedom = coefficients.find(({ reference }) => reference !== null)?.reference?.freedom ?? null;
  if (freedom === null) return 'With these cells they have no reference.';
  if (correction !== 'CR2')
    return `Each coefficient is referred to t on ${freedomText(freedom)}, one less than there are clusters.`;
  return `Each coefficient is referred to t on Satterthwaite’s freedom of its own (${freedomRange(coefficients)}), which is small where few clusters carry the term, however many cells there are.`;
}

function freedomRange(coefficients: readonly Coefficient[]): string {
  const freedoms = coefficients.flatMap(({ reference }) => reference?.freedom ?? []);
  const [low, high] = [Math.min(...freedoms), Math.max(...freedoms)];
  const [from, to] = [freedomText(low), freedomText(high)];
  return from === to ? from : `${from} to ${to}`;
}

function twoWaySentences({ coefficients, residualFreedom }: FitResult): string[] {
  const freedom = coefficients.find(({ reference }) => reference !== null)?.reference?.freedom ?? null;
  const start = `The variance is that of either grouping less that of both at once${freedom === null ? '' : `, referred to t on ${freedomText(freedom)}, one less than the fewer clusters`}.`;
  const below = residualFreedom > 0 ? coefficients.filter(({ se }) => se === null).map(({ term }) => term) : [];
  if (below.length === 0) return [start];
  return [
    start,
    `For ${list(below)} that comes out below 0, which no variance can be: ${below.length === 1 ? 'it has' : 'they have'} no error here. That happens with few clusters, or where cells of one grouping repel each other; cluster by the wider grouping alone.`,
  ];
}

function wildSentences(fit: FitResult, inference: Of<'wild'>): string[] {
  const clusters = list(inference.by);
  if (fit.wild === null || fit.wild.length === 0)
    return [`The wild bootstrap by ${clusters} has no p value with these cells: no coefficient has an error.`];
  const { floor } = fit.wild[0] as NonNullable<FitResult['wild']>[number];
  const total = wildTotal(fit.wild, inference);
  const vectors =
    total === null
      ? `${plural(inference.replications, 'vector')} drawn with seed ${inference.seed}`
      : `all ${plural(total, 'vector')} that there are`;
  return [
    `p values come from the wild bootstrap by ${clusters}: the residuals of each cluster are multiplied by one random number together, with the tested coefficient held at 0, ${vectors}. The ratio is t by CR0.`,
    `No p value can fall below ${number(floor, { digits: 2 })}, whatever the cells. Intervals are not told: that would take the test at every value.`,
  ];
}

/** How many vectors there are where all of them were taken; null where they were drawn. */
function wildTotal(wild: NonNullable<FitResult['wild']>, { replications }: Of<'wild'>): number | null {
  const drawn = wild.every(({ p, count: out }) => p === (1 + out) / (1 + replications));
  const first = wild.find(({ count: out }) => out > 0);
  return drawn || first === undefined ? null : Math.round(first.count / first.p);
}

function kenwardRogerSentences({ coefficients }: FitResult): string[] {
  const some = coefficients.some(({ reference }) => reference?.kind === 't');
  const start =
    'Errors are enlarged by what the estimation of the variance parameters adds to them (Kenward and Roger)';
  if (coefficients.every(({ se }) => se === null))
    return [
      'The correction of Kenward and Roger is undefined with these cells: they do not tell the variance parameters apart.',
    ];
  return [
    some
      ? `${start}; each coefficient is referred to t on a freedom of its own, ${freedomRange(coefficients)}.`
      : `${start}; here nothing was estimated, and they are those of the structure itself.`,
  ];
}

/** Each coefficient's bootstrap; null under another inference, or where nothing could be drawn. */
export function wildTable({ fit }: Pick<Result, 'fit'>): Table | null {
  const { wild } = fit;
  if (wild === null || wild.length === 0) return null;
  const right = (text: string) => ({ text, align: 'right' as const });
  return {
    caption: wildWords.caption,
    head: [
      { text: 'term', align: 'left', breadth: 2 },
      right('t by CR0'),
      right('vectors as far out'),
      right('p'),
      right('least p possible'),
    ],
    rows: wild.map(({ term, count: out, p, floor }) => {
      const ratio = fit.coefficients.find((one) => one.term === term)?.ratio ?? null;
      return [
        { value: null, text: term },
        { value: ratio, text: number(ratio, { digits: 4 }) },
        { value: out, text: count(out) },
        { value: p, text: number(p, { digits: 3 }) },
        { value: floor, text: number(floor, { digits: 2 }) },
      ];
    }),
  };
}

export const wildWords = {
  heading: 'How the errors were found',
  caption: 'The wild bootstrap, coefficient by coefficient',
};
