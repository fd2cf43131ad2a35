import type { Evidence, EvidenceTest } from '@core/protocol/result';

const tests: Readonly<Record<string, EvidenceTest>> = {
  breusch_pagan_original: 'breusch-pagan',
  breusch_pagan_studentised: 'koenker',
  score_log_size: 'size-score',
  score_log_size_studentised: 'size-score-studentised',
  white: 'white',
  goldfeld_quandt_size: 'goldfeld-quandt',
  brown_forsythe_size_quarters: 'brown-forsythe',
  dumouchel_duncan_f: 'dumouchel-duncan',
};

const slopes = ['intercept', 'intercept_se', 'intercept_p', 'slope', 'slope_se', 'slope_p'];
const predictions = ['normal', 't_G-1', 't_G-2'];

const names =
  /^(q_(statistic|df|p)|i_squared|h_squared|prediction_(low|high)|lr_(statistic|p_mixture)|mixture_(correlation|weight)|shapiro_wilk_[wp]|squared_residual_on_\w+|dependence)(:|$)/;

/** True for the names that `valueOf` knows, whatever a result holds. */
export function isEvidenceQuantity(quantity: string): boolean {
  return names.test(quantity) || (quantity.split(':')[0] as string) in tests;
}

/** A reference quantity's value in the evidence of a result; undefined where the name is none of the structure tests'. */
// biome-ignore lint/suspicious/noShadowRestrictedNames: the maps of quantities share this name, and none uses the global.
export function valueOf(quantity: string, evidence: readonly Evidence[]): number | null | undefined {
  const [name, part, more] = quantity.split(':') as [string, string | undefined, string | undefined];
  const of = (test: EvidenceTest) => evidence.find((entry) => entry.test === test);
  const plain = tests[name];
  if (plain) return figureOf(of(plain), part);
  if (name === 'shapiro_wilk_w') return of('shapiro-wilk')?.statistic;
  if (name === 'shapiro_wilk_p') return of('shapiro-wilk')?.p;
  if (name.startsWith('squared_residual_on_'))
    return part && slopes.includes(part) ? numberIn(of('size-slope'), part) : undefined;
  if (name === 'dependence') return dependence(evidence, part as string, more as string);
  if (name.startsWith('lr_') || name.startsWith('mixture_')) return boundary(evidence, { name, part, more });
  return between(quantity, of);
}

/** NAME:SET or mixture_weight:PLACE:SET, a set as "tau_squared=0,omega_squared=0". */
function boundary(
  evidence: readonly Evidence[],
  { name, part, more }: { name: string; part: string | undefined; more: string | undefined },
): number | null | undefined {
  const set = (name === 'mixture_weight' ? more : part) ?? '';
  const wanted = set.split(',').map((one) => (one === 'tau_squared=0' ? 'tau2' : 'omega2'));
  const entry = evidence.find(({ test, detail: { zero } }) => {
    const names = Array.isArray(zero) ? zero.map((one) => String(one).split(':')[0]) : [];
    return test === 'boundary-likelihood-ratio' && names.join() === wanted.join();
  });
  if (name === 'lr_statistic') return entry?.statistic;
  if (name === 'lr_p_mixture') return entry?.p;
  if (name === 'mixture_correlation') return numberIn(entry, 'correlation');
  const weights = entry?.detail['weights'];
  return Array.isArray(weights) ? (weights[Number(part)] as number | null) : undefined;
}

function figureOf(entry: Evidence | undefined, part: string | undefined): number | null | undefined {
  if (part === undefined) return entry?.statistic;
  if (part === 'df') return entry?.freedom1;
  if (part === 'df2') return entry?.freedom2;
  return part === 'p' ? entry?.p : undefined;
}

function dependence(evidence: readonly Evidence[], by: string, figure: string): number | null | undefined {
  const entry = evidence.find(({ test, detail }) => {
    if (test !== 'dependence' || !Array.isArray(detail['by'])) return false;
    const columns = detail['by'].join(' · ');
    return (detail['order'] === null ? columns : `${detail['order']} in ${columns}`) === by;
  });
  if (figure === 'statistic') return entry?.statistic;
  if (figure === 'p') return entry?.p;
  return numberIn(entry, figure);
}

function between(quantity: string, of: (test: EvidenceTest) => Evidence | undefined): number | null | undefined {
  const spread = of('heterogeneity');
  switch (quantity) {
    case 'q_statistic':
      return spread?.statistic;
    case 'q_df':
      return spread?.freedom1;
    case 'q_p':
      return spread?.p;
    case 'i_squared:from_q':
      return numberIn(spread, 'iSquaredQ');
    case 'h_squared:from_q':
      return numberIn(spread, 'hSquaredQ');
    case 'i_squared:from_tau_squared':
      return numberIn(spread, 'iSquaredTau2');
    case 'h_squared:from_tau_squared':
      return numberIn(spread, 'hSquaredTau2');
    default:
      return prediction(quantity, spread);
  }
}

function prediction(quantity: string, spread: Evidence | undefined): number | null | undefined {
  const [name, reference] = quantity.split(':') as [string, string | undefined];
  const at = predictions.indexOf(reference ?? '');
  if (at < 0 || !(name === 'prediction_low' || name === 'prediction_high')) return undefined;
  const entries = spread?.detail['prediction'];
  const entry = Array.isArray(entries) ? entries[at] : undefined;
  if (entry === undefined) return undefined;
  return (entry as { low: number | null; high: number | null })[name === 'prediction_low' ? 'low' : 'high'];
}

function numberIn(entry: Evidence | undefined, key: string): number | null | undefined {
  const value = entry?.detail[key];
  return typeof value === 'number' || value === null ? value : undefined;
}
