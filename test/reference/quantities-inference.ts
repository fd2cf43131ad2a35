import { normalTwoSided } from '@core/numbers/distributions';
import type { Plan, Question } from '@core/protocol/plan';
import type { Coefficient, QuestionResult, Result } from '@core/protocol/result';
import type { ReferenceCase } from '../support/case';

/** The parts of a result that hold the quantities of this map. */
export type InferenceParts = Pick<Result, 'fit' | 'questions' | 'betweenRules'>;

/** What a case asks beside its fits: joint tests and predictions of its roles, as questions of a plan under their names. */
export function questionsOfCase({ roles }: ReferenceCase, plan: Pick<Plan, 'questions'>): Question[] {
  const joint = Object.entries(roles.joint_questions ?? {}).map(
    ([name, terms]): Question => ({ kind: 'joint', terms, name, family: null }),
  );
  const expected = Object.entries(roles.predictions ?? {}).map(
    ([name, { at, size }]): Question => ({
      kind: 'expect',
      where: at,
      size: size ?? null,
      error: null,
      name,
      family: null,
    }),
  );
  const own = plan.questions.map((question): Question => {
    const asked = { ...question, name: question.name ?? null, family: question.family ?? null };
    return asked.kind === 'expect' ? { ...asked, size: asked.size ?? null, error: asked.error ?? null } : asked;
  });
  return [...own, ...joint, ...expected];
}

/** The program's value of a reference quantity; undefined: the quantity belongs to another map. */
// biome-ignore lint/suspicious/noShadowRestrictedNames: the maps of quantities share this name, and none uses the global.
export function valueOf(quantity: string, result: InferenceParts): number | null | undefined {
  const whole = wholes[quantity];
  if (whole) return whole(result);
  if (quantity.startsWith('question:')) return ofQuestion(quantity.slice('question:'.length), result.questions);
  if (quantity.startsWith('covariance:')) return ofCovariance(quantity.slice('covariance:'.length), result);
  const cut = quantity.indexOf(':');
  const [head, name] = [quantity.slice(0, cut), quantity.slice(cut + 1)];
  const coefficient = result.fit.coefficients.find(({ term }) => term === name);
  if (head === 'wild_count' || head === 'wild_p') {
    const one = result.fit.wild?.find(({ term }) => term === name);
    return head === 'wild_count' ? one?.count : one?.p;
  }
  const take = ofCoefficient[head];
  if (take && coefficient) return take(coefficient);
  if (head === 'standard_error') return parameter(name, result)?.se;
  if (head === 'gamma' || head === 'phi') return parameter(quantity, result)?.estimate;
  const answer = ofAnswer[head];
  return answer ? ofQuestion(`${name}:${answer}`, result.questions) : undefined;
}

type Take = (result: InferenceParts) => number | null | undefined;

const wholes: Record<string, Take> = {
  residual_sd: ({ fit }) => fit.residualSd,
  residual_df: ({ fit }) => fit.residualFreedom,
  weighted_rss: ({ fit }) => fit.weightedRss,
  'r_squared:weighted_centred': ({ fit }) => (fit.rSquared.centred ? fit.rSquared.weighted : undefined),
  'r_squared:weighted_uncentred': ({ fit }) => (fit.rSquared.centred ? undefined : fit.rSquared.weighted),
  'r_squared:raw_scale': ({ fit }) => fit.rSquared.raw,
  'adjusted_r_squared:weighted_centred': ({ fit }) => fit.rSquared.adjusted,
  log_likelihood: ({ fit }) => fit.logLikelihood,
  restricted_log_likelihood: ({ fit }) => fit.restrictedLogLikelihood,
  aic: ({ fit }) => fit.aic,
  aicc: ({ fit }) => fit.aicc,
  bic: ({ fit }) => fit.bic,
  knapp_hartung_q: ({ fit }) => fit.knappHartungQ,
  chi_square_scale: ({ fit }) => fit.chiSquare?.statistic,
  chi_square_scale_p: ({ fit }) => fit.chiSquare?.p,
  pearson_chi_square: ({ fit }) => fit.chiSquare?.statistic,
  minimum_chi_square: ({ fit }) => fit.chiSquare?.statistic,
  deviance: ({ fit }) => fit.deviance,
  'phi:binomial': (result) => parameter('phi', result)?.estimate,
  'phi:counts': (result) => parameter('phi', result)?.estimate,
  q_statistic: ({ fit }) => fit.chiSquare?.statistic,
  q_df: ({ fit }) => fit.chiSquare?.freedom,
  q_p: ({ fit }) => fit.chiSquare?.p,
  tau_squared_bias: ({ fit }) => fit.tau2Bias,
  tau_squared: (result) => parameter('tau_squared', result)?.estimate,
  phi: (result) => parameter('phi', result)?.estimate,
  'phi:per-size': (result) => parameter('phi', result)?.estimate,
  delta: (result) => parameter('delta', result)?.estimate,
  rho: (result) => parameter('rho', result)?.estimate,
  omega_squared: (result) => parameter('omega_squared', result)?.estimate,
  'phi:scale': (result) => parameter('phi', result)?.estimate,
  tau_squared_profile95_low: (result) => parameter('tau_squared', result)?.low,
  tau_squared_profile95_high: (result) => parameter('tau_squared', result)?.high,
  delta_profile95_low: (result) => parameter('delta', result)?.low,
  delta_profile95_high: (result) => parameter('delta', result)?.high,
  q_profile_low: (result) => ownRule(result)?.qLow,
  q_profile_high: (result) => ownRule(result)?.qHigh,
};

const ofCoefficient: Record<string, (coefficient: Coefficient) => number | null | undefined> = {
  coefficient: ({ estimate }) => estimate,
  standard_error: ({ se }) => se,
  t_statistic: ({ ratio, reference }) => (reference?.kind === 't' ? ratio : undefined),
  // A published z of a fit that is referred to t here is the same ratio.
  z_statistic: ({ ratio }) => ratio,
  t_CR0: ({ ratio }) => ratio,
  p_value: ({ p }) => p,
  p_value_normal: ({ ratio }) => (ratio === null ? null : normalTwoSided(Math.abs(ratio))),
  ci95_low: ({ low }) => low,
  ci95_high: ({ high }) => high,
  degrees_of_freedom: ({ reference }) => reference?.freedom,
};

/** Where a quantity of a named question stands in its answer. */
const ofAnswer: Record<string, string> = {
  f_statistic: 'statistic',
  f_p: 'p',
  f_df1: 'freedom1',
  f_df2: 'freedom2',
  f_scale: 'scale',
  wald_chi_square: 'statistic',
  wald_p: 'p',
  predicted_mean: 'fitted:estimate',
  predicted_mean_se: 'fitted:se',
  predicted_mean_low: 'fitted:low',
  predicted_mean_high: 'fitted:high',
  predicted_cell_low: 'newCellObserved:low',
  predicted_cell_high: 'newCellObserved:high',
};

const parameterNames: Record<string, string> = {
  tau_squared: 'tau2',
  phi: 'phi',
  'phi:per-size': 'phi',
  delta: 'delta',
};

/** The cases write `phi:CLASS` and `gamma:TERM` without a space. */
function parameter(name: string, { fit }: InferenceParts) {
  const gamma = name.replace(/^gamma:/, 'gamma: ');
  const names = [parameterNames[name], gamma, name.replace(/^phi:/, 'phi: ')];
  return (
    fit.variance.find((each) => names.includes(each.name)) ??
    fit.variance.find(
      (each) =>
        (name === 'rho' && each.name.startsWith('rho: ')) ||
        (name === 'omega_squared' && each.name.startsWith('omega2: ')),
    )
  );
}

function ownRule({ fit, betweenRules }: InferenceParts) {
  const { estimate } = fit;
  const rule = estimate.method === 'moments' ? estimate.rule : estimate.method;
  return betweenRules.find((row) => row.rule === rule);
}

function ofCovariance(pair: string, { fit }: InferenceParts): number | null | undefined {
  const names = fit.coefficients.map(({ term }) => term);
  for (const [i, row] of names.entries())
    for (const [j, column] of names.entries()) if (pair === `${row}:${column}`) return fit.covariance[i]?.[j];
  return undefined;
}

function ofQuestion(path: string, questions: readonly QuestionResult[]): number | null | undefined {
  const asked = questions.find(({ question }) => question.name !== null && path.startsWith(`${question.name}:`));
  if (!asked) return undefined;
  const rest = path.slice((asked.question.name ?? '').length + 1);
  if (rest === 'p_holm') return asked.pHolm;
  let place: unknown = asked.answer;
  for (const step of rest.split(':')) {
    if (place === null) return null;
    if (typeof place !== 'object' || place === undefined || !(step in place)) return undefined;
    place = (place as Record<string, unknown>)[step];
  }
  return typeof place === 'number' || place === null ? place : undefined;
}
