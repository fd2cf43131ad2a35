import type { Plan, Rival } from '@core/protocol/plan';
import type { CellResult, Result } from '@core/protocol/result';

/** What the reference cases name of influence, price, scan and shrunken cells, read from a result. */
export type SensitivityPieces = Partial<
  Pick<
    Result,
    'cells' | 'effectiveCells' | 'beside' | 'square' | 'breakEven' | 'exponentScan' | 'exponentSupport' | 'beam'
  >
>;

export interface SensitivityContext {
  readonly plan: Plan;
  /** Coefficient names in order. */
  readonly terms: readonly string[];
}

const cellFields: Readonly<Record<string, keyof CellResult>> = {
  fitted: 'fitted',
  leverage: 'leverage',
  studentised_internal: 'studentised',
  studentised_external: 'studentisedWithout',
  cooks_distance: 'cookDistance',
  dffits: 'fitShift',
  covratio: 'covarianceRatio',
  whitened_residual: 'whitened',
  weight_share: 'weightShare',
  shrunken: 'shrunken',
  shrinkage: 'ownShare',
  mse: 'mse',
};
const parts = ['g1', 'g2', 'g3'];
const priceFields: Readonly<
  Record<string, 'claimedSe' | 'expectedClaimedSe' | 'actualSe' | 'cost' | 'claimedOverActual'>
> = {
  claimed: 'claimedSe',
  expected_claimed: 'expectedClaimedSe',
  actual: 'actualSe',
  cost: 'cost',
  claimed_over_actual: 'claimedOverActual',
};

/** Names that an earlier case gives to the price of equal weights. */
const ofUnweighted: Readonly<Record<string, string>> = {
  claimed_standard_error: 'claimed',
  actual_standard_error: 'actual',
  cost: 'cost',
  honesty: 'claimed_over_actual',
  actual_covariance: 'covariance',
  eigenvalue_of_difference: 'eigenvalue',
  overall_efficiency: 'efficiency',
};

/** The value of one reference quantity; undefined where it is none of these, or its piece is not there. */
function sensitivityValue(
  quantity: string,
  pieces: SensitivityPieces,
  context: SensitivityContext,
): number | null | undefined {
  const [name = '', ...rest] = quantity.split(':');
  const tail = quantity.slice(name.length + 1);
  if (name === 'effective_cells') return pieces.effectiveCells;
  if (name === 'break_even') return pieces.breakEven?.find(({ term }) => term === tail)?.intraclass;
  if (name === 'price') return priceValue(tail, pieces, context);
  const unweighted = ofUnweighted[name];
  if (unweighted && pieces.beside?.length === 1) {
    return priceValue(`constant:${unweighted}${tail && `:${tail}`}`, pieces, context);
  }
  if (name === 'square') return squareValue(tail, pieces, context);
  if (name === 'moved') return movedValue(tail, pieces, context);
  if (name === 'dfbetas') return shiftValue(tail, pieces, context);
  if (name === 'delta_profile95_low') return pieces.exponentSupport?.low;
  if (name === 'delta_profile95_high') return pieces.exponentSupport?.high;
  if (name.startsWith('profile_') || name === 'sweep_coefficient') return scanValue(name, tail, pieces);
  if (parts.includes(name)) return cellOf(pieces, tail)?.mseParts?.[parts.indexOf(name)];
  const field = cellFields[name];
  const cell = field && rest.length > 0 ? cellOf(pieces, tail) : undefined;
  return field && cell ? (cell[field] as number | null) : undefined;
}

function cellOf({ cells }: SensitivityPieces, label: string): CellResult | undefined {
  return cells?.find((cell) => cell.label === label || `row${cell.label}` === label);
}

function rivalName(rival: Rival): string {
  return typeof rival === 'string' ? rival : rival.parts.map(({ kind }) => kind).join(' + ');
}

/** RIVAL:FIGURE:TERM, RIVAL:covariance:A:B with terms that may hold ": " themselves. */
function priceValue(
  tail: string,
  { beside }: SensitivityPieces,
  { plan, terms }: SensitivityContext,
): number | null | undefined {
  const at = plan.beside.findIndex((rival) => tail.startsWith(`${rivalName(rival)}:`));
  const one = beside?.[at];
  if (!one) return undefined;
  const [figure = '', ...rest] = tail.slice(rivalName(one.variance).length + 1).split(':');
  const what = rest.join(':');
  if (figure === 'coefficient') return one.coefficients.find(({ term }) => term === what)?.estimate;
  if (figure === 'eigenvalue') return one.eigenvalues[Number(what) - 1];
  if (figure === 'efficiency') return one.efficiency;
  const field = priceFields[figure];
  if (field) return one.price.find(({ term }) => term === what)?.[field];
  const [i, j] = pairOf(what, terms);
  return figure === 'covariance' ? one.actualCovariance[i]?.[j] : undefined;
}

function pairOf(text: string, terms: readonly string[]): [number, number] {
  for (const [i, a] of terms.entries()) for (const [j, b] of terms.entries()) if (text === `${a}:${b}`) return [i, j];
  return [-1, -1];
}

function squareValue(
  tail: string,
  { square }: SensitivityPieces,
  { plan }: SensitivityContext,
): number | null | undefined {
  const names = ['chosen', ...plan.beside.map(rivalName)];
  const truth = names.findIndex((name) => tail.startsWith(`${name}:`));
  const left = tail.slice((names[truth]?.length ?? 0) + 1);
  const weighting = names.findIndex((name) => left.startsWith(`${name}:`));
  const term = left.slice((names[weighting]?.length ?? 0) + 1);
  return square?.find((one) => one.truth === truth && one.weighting === weighting && one.term === term)?.se;
}

function movedValue(
  tail: string,
  { beside, cells }: SensitivityPieces,
  { plan }: SensitivityContext,
): number | undefined {
  const at = plan.beside.findIndex((rival) => tail.startsWith(`${rivalName(rival)}:`));
  const left = tail.slice(rivalName(plan.beside[at] ?? 'constant').length + 1);
  const moved = beside?.[at]?.moved.find(({ term }) => left.startsWith(`${term}:`));
  const place = cells?.findIndex(({ label }) => label === left.slice((moved?.term.length ?? 0) + 1)) ?? -1;
  return moved?.byCell[place];
}

function shiftValue(tail: string, pieces: SensitivityPieces, { terms }: SensitivityContext): number | null | undefined {
  const term = terms.findIndex((name) => tail.startsWith(`${name}:`) && cellOf(pieces, tail.slice(name.length + 1)));
  return term < 0 ? undefined : cellOf(pieces, tail.slice((terms[term] as string).length + 1))?.coefficientShifts[term];
}

/** delta=D, or delta=D:TERM; the grid holds every exponent that the cases name. */
function scanValue(name: string, tail: string, { exponentScan }: SensitivityPieces): number | undefined {
  const found = /^delta=([0-9.]+)(?::(.*))?$/.exec(tail);
  const point = exponentScan?.find(({ delta }) => delta === Number(found?.[1]));
  if (name === 'profile_log_likelihood') return point?.logLikelihood;
  if (name === 'profile_restricted_log_likelihood') return point?.restrictedLogLikelihood;
  return point?.coefficients.find(({ term }) => term === found?.[2])?.estimate;
}

export { sensitivityValue as valueOf };
