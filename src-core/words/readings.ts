import type { NoDeparture, WhyNot } from '../protocol/evidence';
import type { Evidence, Result, SmallestDeparture } from '../protocol/result';
import { freedomText } from './coefficients';
import { testAtStart } from './evidence-names';
import { count, decimalsBy, list, number, numberWord, percent, pIs } from './numbers';
import { parameterSign } from './structures';

/** How a test ended, in a table. */
export const readingNames: { readonly [R in Evidence['reading']]: string } = {
  rejects: 'rejects',
  'does-not-contradict': 'does not contradict',
  'not-applicable': 'no say',
};

const whyNot: { readonly [W in WhyNot]: string } = {
  'no-residual-freedom': 'as many coefficients as cells: no residuals are left',
  'no-residuals': 'the fit leaves no residuals to speak of',
  'no-size': 'no size was stated',
  'equal-sizes': 'all sizes are equal',
  'no-columns': 'the model has no column but the intercept',
  'too-few-cells': 'too few cells',
  'too-many-cells': 'too many cells for its published range',
  'no-variation': 'what it divides by is zero',
  structure: 'it has no reading under this structure',
  method: 'it needs a fit by full or restricted likelihood',
  'nothing-added': 'what it would add depends on the model’s own columns',
  'no-grouping': 'no label column groups cells, and no order or neighbours were given',
  absorbed: 'the model holds the groups’ own indicators, so that the statistic cannot vary',
  'no-convergence': 'the structure without the part could not be fitted',
  'no-mixture': 'its reference distribution is not known where more than one thing stands at its boundary',
  correlated: 'it reads residuals cell by cell, and correlated cells have no residuals of their own',
};

const noDeparture: { readonly [W in NoDeparture]: string } = {
  'not-defined': 'not defined',
  'no-size': 'no size was stated',
  'equal-sizes': 'all sizes are equal',
  'out-of-reach': 'none within reach',
  structure: 'not defined under this structure',
  'too-many-cells': 'not computed for so many cells that go together',
  cancelled: 'not computed',
};

/** Why a test says nothing here; null where it does. */
export function whyNotText({ detail }: Evidence): string | null {
  const why = detail['why'];
  return typeof why === 'string' ? ((whyNot as { readonly [w: string]: string | undefined })[why] ?? why) : null;
}

/** The columns by which a test of dependence pairs cells, with the order if there is one; null for every other test. */
export function pairedBy({ test, detail }: Evidence): string[] | null {
  if (test !== 'dependence') return null;
  const by = Array.isArray(detail['by']) ? detail['by'].filter((one) => typeof one === 'string') : [];
  const order = detail['order'];
  return typeof order === 'string' ? [...by, `${order} (adjacent)`] : by;
}

/** A statistic below this is 0 but for rounding. */
const ROUNDING = 1e-12;

/** "chi-square 1.3 on 1, p = 0.250": what a test found. */
export function foundText(one: Evidence): string {
  const { test, statistic, p } = one;
  const value = statistic !== null && Math.abs(statistic) < ROUNDING ? 0 : statistic;
  const parts = [`${signOf(one)} ${number(value, { digits: 3 })}${onText(one)}`];
  if (test === 'dependence' && typeof one.detail['expectation'] === 'number')
    parts.push(`expected ${number(one.detail['expectation'], { digits: 2 })}`);
  if (p !== null) parts.push(pIs(p));
  return parts.join(', ');
}

function onText({ test, freedom1, freedom2, detail }: Evidence): string {
  const freedom = [freedom1, freedom2].filter((one) => one !== null).map(freedomText);
  if (freedom.length === 0) return '';
  return test === 'boundary-likelihood-ratio' ? boundaryReference(detail) : ` on ${freedom.join(' and ')}`;
}

/** What a likelihood ratio at a boundary was compared with. */
function boundaryReference({ weights, replications }: Evidence['detail']): string {
  if (typeof replications === 'number') return `, against ${count(replications)} draws without it`;
  const [zero, one, two] = Array.isArray(weights) ? weights.filter((weight) => typeof weight === 'number') : [];
  if (zero === undefined || one === undefined) return '';
  if (!two) return ', half a chi-square on 1';
  const share = (weight: number): string => percent(weight, { decimals: 0 });
  return `, a mixture of ${share(zero)} nought, ${share(one)} chi-square on 1 and ${share(two)} chi-square on 2`;
}

function signOf({ test, freedom2 }: Evidence): string {
  switch (test) {
    case 'size-slope':
      return 't';
    case 'dependence':
      return 'I';
    case 'shapiro-wilk':
      return 'W';
    case 'heterogeneity':
      return 'Q';
    case 'boundary-likelihood-ratio':
      return 'likelihood ratio';
    default:
      return freedom2 === null ? 'chi-square' : 'F';
  }
}

/**
 * What a test says, with the smallest departure that it would probably have found: a test that does not reject is not evidence that all is well.
 *
 * term: the coefficient whose error under the departure is told; null for none.
 */
export function readingSentences(one: Evidence, result: Result, term: string | null): string {
  const name = testAtStart(one.test, pairedBy(one));
  if (one.reading === 'not-applicable') return `${name} says nothing here: ${whyNotText(one) ?? 'it is undefined'}.`;
  if (one.p === null)
    return `${name}: ${foundText(one)}; it has no p value, since ${whyNotText(one) ?? 'it is undefined'}.`;
  return `${name} ${verdict(one, result)} (${foundText(one)}).${one.reading === 'rejects' ? '' : departureSentence(one, result, term)}`;
}

/** What a reading means: most tests ask whether the structure is wrong, two whether a part is needed at all. */
function verdict({ test, reading, detail }: Evidence, { fit }: Result): string {
  const rejects = reading === 'rejects';
  if (test === 'boundary-likelihood-ratio') {
    const zero = Array.isArray(detail['zero']) ? detail['zero'].filter((one) => typeof one === 'string') : [];
    const signs = list(zero.map(parameterSign));
    return rejects ? `speaks for the part: ${signs} = 0 is rejected` : `does not contradict ${signs} = 0`;
  }
  if (test === 'heterogeneity') {
    const between = fit.variance.some(({ name }) => name === 'tau2');
    if (!rejects) return 'does not contradict that cells differ by their given errors alone';
    return between
      ? 'speaks for the between part: cells differ beyond their given errors'
      : 'rejects that cells differ by their given errors alone';
  }
  if (test === 'dumouchel-duncan')
    return rejects
      ? 'finds that weighted and unweighted fits disagree'
      : 'does not contradict that weighted and unweighted fits agree';
  if (test === 'dependence') return rejects ? 'rejects independence' : 'does not contradict independence';
  if (test === 'shapiro-wilk') return rejects ? 'rejects normal residuals' : 'does not contradict normal residuals';
  return rejects ? 'rejects the structure' : 'does not contradict the structure';
}

function departureSentence(
  { test, smallestDeparture: found, detail }: Evidence,
  result: Result,
  term: string | null,
): string {
  if (isFittedAway(test, result)) return FITTED_AWAY;
  const cells = count(result.cells.length);
  if (found === null) {
    const why = detail['departureWhy'];
    if (why === 'not-defined') return ' No smallest departure is defined for it.';
    if (why !== 'out-of-reach') return '';
    return ` With ${cells} cells it would not have had an 80 % chance of noticing any departure of the kind looked for, however large: it is no comfort.`;
  }
  const error = errorUnder(found, result, term);
  return ` With ${cells} cells it would have had an 80 % chance of noticing a departure only if ${departurePhrase(found)}${error}.`;
}

const FITTED_AWAY =
  ' The structure estimates how variance follows size, which brings this score to nought or near it whatever the data: it is no evidence.';

/** True of a score on log size where the exponent of size, or the coefficient of its logarithm, is itself estimated. */
function isFittedAway(test: Evidence['test'], { plan }: Result): boolean {
  if (test !== 'size-score' && test !== 'size-score-studentised') return false;
  const { roles, variance } = plan;
  return variance.parts.some((part) => {
    if (part.kind === 'size-power') return part.exponent === 'estimate';
    if (part.kind !== 'log-linear' || roles.designEffect !== null) return false;
    return part.terms.some((term) => 'transform' in term && term.transform === 'log' && term.column === roles.size);
  });
}

function departurePhrase({ measure, size }: SmallestDeparture): string {
  switch (measure) {
    case 'variance-ratio':
      return `variance in the smallest quarter of cells, relative to the largest, were at least ${ratioText(size)} times what is stated`;
    case 'common-correlation':
      return `paired cells shared a correlation of at least ${number(size, { digits: 2 })}`;
    case 'tau2':
      return `τ² were at least ${number(size, { digits: 2 })}`;
    case 'omega2':
      return `ω² were at least ${number(size, { digits: 2 })}`;
  }
}

/** A multiplier of a variance; thousands of times are told as such. */
function ratioText(size: number): string {
  return number(size, size >= 100 ? { decimals: 0 } : { digits: 2 });
}

function errorUnder(found: SmallestDeparture, { fit }: Result, term: string | null): string {
  const there = found.errors.find((one) => one.term === term);
  const here = fit.coefficients.find((one) => one.term === term);
  if (there === undefined || here?.se == null) return '';
  const decimals = decimalsBy(here.se);
  const [now, then] = [here.se, there.se].map((se) => number(se, { decimals: decimals + 1 })) as [string, string];
  return now === then
    ? `; one of that size would leave the standard error of ${term} at ${now}`
    : `; one of that size would make the standard error of ${term} ${then}, not ${now}`;
}

/** The smallest departure in a table: "variance ratio 5.2", or why there is none. */
export function departureText({ smallestDeparture: found, detail }: Evidence): string {
  if (found === null) {
    const why = detail['departureWhy'];
    return typeof why === 'string' ? ((noDeparture as { readonly [w: string]: string | undefined })[why] ?? why) : '';
  }
  switch (found.measure) {
    case 'variance-ratio':
      return `variance × ${ratioText(found.size)}`;
    case 'common-correlation':
      return `correlation ${number(found.size, { digits: 2 })}`;
    default:
      return `${parameterSign(found.measure)} ${number(found.size, { digits: 2 })}`;
  }
}

/** How many tests could contradict the structure, how many did, and how many would do so by chance. */
export function batterySentence(evidence: readonly Evidence[], { fit }: Pick<Result, 'fit'>): string {
  const spoken = evidence.filter(({ p }) => p !== null);
  if (spoken.length === 0) return 'No test of the structure has a say with these cells.';
  const between = fit.variance.some(({ name }) => name === 'tau2');
  const forParts = ({ test }: Evidence): boolean =>
    test === 'boundary-likelihood-ratio' || (test === 'heterogeneity' && between);
  const against = spoken.filter((one) => !forParts(one));
  const rejected = against.filter(({ reading }) => reading === 'rejects').length;
  const start = `${numberWord(spoken.length)} of ${count(evidence.length)} tests ${spoken.length === 1 ? 'has' : 'have'} a say under this structure.`;
  if (against.length === 0) return start;
  const found = rejected === 0 ? 'none does' : rejected === 1 ? 'one does' : `${count(rejected)} do`;
  const parts = spoken.length - against.length;
  const other =
    parts === 0 ? '' : ` ${parts === 1 ? 'One asks' : `${numberWord(parts)} ask`} whether a part is needed at all.`;
  if (against.length === 1)
    return `${start}${other} ${other === '' ? 'It could contradict' : 'The other could contradict'} it, or what it assumes, and ${rejected === 0 ? 'does not' : 'does'}; read at the 5 % level, it would do so by chance one time in twenty.`;
  return `${start} Of ${count(against.length)} that could contradict it, or what it assumes, ${found}.${other} Each was read at the 5 % level by itself: of ${count(against.length)} true hypotheses about ${number(0.05 * against.length, { digits: 1 })} would be rejected by chance.`;
}

/** I², H² and the prediction intervals that a test of heterogeneity carries; nothing for others. */
export function heterogeneitySentence({ detail }: Evidence): string | null {
  const { iSquaredQ, iSquaredTau2, hSquaredQ, hSquaredTau2 } = detail;
  if (typeof iSquaredQ !== 'number') return null;
  const by = typeof iSquaredTau2 === 'number' ? ` (${percent(iSquaredTau2)} by the τ² of the fit)` : '';
  const h =
    typeof hSquaredQ !== 'number'
      ? ''
      : `; H² is ${number(hSquaredQ, { digits: 3 })}${typeof hSquaredTau2 === 'number' ? ` (${number(hSquaredTau2, { digits: 3 })})` : ''}`;
  return `Of the scatter about the fit, I² = ${percent(iSquaredQ)}${by} is beyond the given errors${h}.`;
}
