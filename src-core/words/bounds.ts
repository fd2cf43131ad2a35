import type { Bound, Coefficient, Result } from '../protocol/result';
import { count, decimalsBy, levelText, number, plural, pluralWord, rangeText } from './numbers';
import { inOutcomeUnit, outcomeName } from './units';

/** "0.40 to 1.18", "0.40 or more", "without bounds": a range that may be open. */
export function boundsText(low: number | null, high: number | null, decimals: number): string {
  if (low === null && high === null) return 'without bounds';
  if (low === null) return `${number(high, { decimals })} or less`;
  if (high === null) return `${number(low, { decimals })} or more`;
  return rangeText(low, high, decimals);
}

/**
 * What is uncertain, how the range was had and how it was searched.
 *
 *     Values of 7 cells are known to within limits only; 2 of these cells are left out of the fit for that, and taken in here. ...
 */
export function boundsLead({ bounds, plan }: Result): string | null {
  const [first] = bounds;
  if (first === undefined) return null;
  const { cells, brought, outside } = first.over;
  const start = `${pluralWord(cells, 'cell has a value', 'cells have values')} known to within limits only`;
  const taken =
    brought === 0
      ? '.'
      : `; the fit leaves ${brought === cells ? (cells === 1 ? 'it' : 'them') : `${count(brought)} of them`} out for that, and ${brought === 1 ? 'it is' : 'they are'} taken in here.`;
  const left =
    outside === 0
      ? ''
      : ` ${pluralWord(outside, 'further cell lacks', 'further cells lack')} something else as well, and cannot come in.`;
  return `${start}${taken}${left} ${howFound(first, outcomeName(plan))}`;
}

function howFound({ weightsHeld, refitted }: Bound, outcome: string): string {
  if (!weightsHeld)
    return `The weights do not depend on ${outcome}, so that each coefficient is linear in it and its range exact.`;
  const held =
    'The weights are held at those of the fit, which is an approximation: they depend on the values themselves, or a covariate is uncertain as well.';
  return refitted === null ? held : `${held} At both extremes everything was fitted again.`;
}

/**
 * The range of one coefficient and what survives it.
 *
 *     Over all that they can be, income lies between 0.41 and 1.12; fitted again at the extremes, 0.44 to 1.09. The sign survives, significance does not.
 */
export function boundSentence(bound: Bound, own: Coefficient, { plan }: Pick<Result, 'plan'>): string {
  const decimals = decimalsBy(own.se, own.estimate);
  const { term, low, high, refitted } = bound;
  const ends = [low, high].map((end) => number(end, { decimals }));
  const range =
    low !== null && high !== null
      ? `${term} lies between ${inOutcomeUnit(ends.join(' and '), plan)}`
      : low === null && high === null
        ? `${term} has no bounds`
        : `${term} is ${inOutcomeUnit(low === null ? (ends[1] as string) : (ends[0] as string), plan)} or ${low === null ? 'less' : 'more'}`;
  const again =
    refitted === null || (refitted.low === null && refitted.high === null)
      ? ''
      : `; fitted again at the extremes, ${boundsText(refitted.low, refitted.high, decimals)}`;
  return `Over all that they can be, ${range}${again}. ${survivalSentence(bound, own)}`;
}

function survivalSentence({ survives }: Bound, { low, high }: Coefficient): string {
  const told = low !== null && high !== null && (low > 0 || high < 0);
  if (!told)
    return survives.sign
      ? 'The sign survives; it was not told from zero to begin with.'
      : 'Its sign can turn, and it was not told from zero to begin with.';
  if (survives.sign && survives.significance) return 'Sign and significance survive.';
  return survives.sign
    ? 'The sign survives; that it is told from zero does not.'
    : 'Its sign can turn, so that neither sign nor significance survives.';
}

/** How significance was judged. */
export function vertexNote({ bounds, fit }: Result): string | null {
  const [first] = bounds;
  if (first === undefined) return null;
  const { vertices, all } = first.over;
  const level = levelText(fit.inference.level);
  if (bounds.some(({ low, high }) => low === null || high === null))
    return 'An end without a limit leaves significance unshown, and a range open where it pulls.';
  if (vertices === 0)
    return `No coefficient was told from zero at ${level}, so that no significance was there to lose.`;
  return all
    ? `Significance: whether the ${level} interval excludes zero at each of ${plural(vertices, 'combination')} of lowest and highest values, ratios not being monotone in them.`
    : `Significance: whether the ${level} interval excludes zero at ${plural(vertices, 'combination')} of lowest and highest values: both extremes of every coefficient, steps that make its ratio smallest, and draws with seed 1; all of them would be too many.`;
}

/** What survives, in a table. */
export function survivalText(survives: boolean): string {
  return survives ? 'survives' : 'does not';
}
