import { isLinked, isOfCounts } from '../protocol/linked';
import type { Plan } from '../protocol/plan';
import type { FitResult, Result } from '../protocol/result';
import { freedomText } from './coefficients';
import { count, number, pIs, plural } from './numbers';
import { tiesCells } from './structures';

/** One line of the table of figures of the fit. */
export interface FitLine {
  readonly name: string;
  readonly value: number | null;
  readonly text: string;
  /** Formula or remark. */
  readonly says: string;
}

/** The figures of the fit under their own names, two named R² among them. */
export function fitLines({ plan, fit, cells, effectiveCells }: Result): FitLine[] {
  const line = (name: string, value: number | null, says: string, digits = 4): FitLine => ({
    name,
    value,
    text: number(value, { digits }),
    says,
  });
  const whole = (name: string, value: number, says: string): FitLine => ({ name, value, text: count(value), says });
  const { rSquared } = fit;
  const base = rSquared.centred ? 'the weighted mean' : 'zero, as there is no intercept';
  return [
    whole('cells', cells.length, 'rows used'),
    whole(
      'coefficients',
      fit.coefficients.length,
      fit.coefficients[0]?.term === 'intercept' ? 'the intercept included' : 'there is no intercept',
    ),
    whole('residual freedom', fit.residualFreedom, 'cells less coefficients'),
    ...(effectiveCells === null ? [] : [line('effective cells', effectiveCells, '(Σw)² / Σw² of the weights')]),
    ...(isLinked(plan)
      ? []
      : [
          line(
            'weighted R²',
            rSquared.weighted,
            `1 − weighted squared residuals over weighted squared distances from ${base}`,
          ),
          line('adjusted weighted R²', rSquared.adjusted, 'the same, for the number of coefficients'),
        ]),
    line('R² on the unweighted scale', rSquared.raw, '1 − Σr² / Σ(y − mean)²; may be negative'),
    line('residual deviation', fit.residualSd, 'root of the mean squared whitened residual'),
    ...(fit.deviance === null
      ? []
      : [
          line(
            'deviance',
            fit.deviance,
            'twice what the fit’s log-likelihood falls short of that of the observed values',
          ),
        ]),
    ...likelihoodLines({ plan, fit }, line),
    ...criteria(fit, line),
    ...(fit.knappHartungQ === null
      ? []
      : [line('Knapp-Hartung factor', fit.knappHartungQ, 'multiplies every variance of a coefficient')]),
    ...(fit.tau2Bias === null ? [] : [line('bias of τ²', fit.tau2Bias, 'of full likelihood, to first order')]),
  ];
}

function likelihoodLines(
  { plan, fit }: Pick<Result, 'plan' | 'fit'>,
  line: (name: string, value: number | null, says: string, digits?: number) => FitLine,
): FitLine[] {
  if (isLinked(plan))
    return fit.logLikelihood === null
      ? []
      : [line('log-likelihood', fit.logLikelihood, 'of the counts, their coefficients included', 6)];
  if (isOfCounts(plan) && plan.outcomeScale === 'identity') return [];
  return [
    line('log-likelihood', fit.logLikelihood, 'full', 6),
    line(
      'restricted log-likelihood',
      fit.restrictedLogLikelihood,
      'comparable only for the same columns in the same units',
      6,
    ),
  ];
}

function criteria(
  fit: FitResult,
  line: (name: string, value: number | null, says: string, digits?: number) => FitLine,
): FitLine[] {
  if (fit.aic === null && fit.bic === null) return [];
  const by = fit.estimate.method === 'restricted' ? 'restricted likelihood' : 'full likelihood';
  return [
    line('AIC', fit.aic, `by the ${by}`, 5),
    line('AICc', fit.aicc, fit.aicc === null ? 'undefined with so few cells' : 'for few cells', 5),
    line('BIC', fit.bic, `by the ${by}`, 5),
  ];
}

/** R² of averages is not R² of persons. */
export function rSquaredRemark(plan: Plan): string {
  return isLinked(plan)
    ? 'Under maximum likelihood with a link the deviance judges the fit; the one R² is that of the shares or rates themselves, of averages and not of persons.'
    : twoRSquared;
}

const twoRSquared =
  'Two R² stand under their own names, since weights change what is counted. Either describes averages: R² of averages is not R² of persons, and is nearly always the larger.';

/** What judges errors whose scale is fixed. */
export function chiSquareSentence({ chiSquare }: FitResult): string | null {
  if (chiSquare === null) return null;
  const { statistic, freedom, p } = chiSquare;
  if (p === null || freedom <= 0) return 'No residual is left to judge the stated variances by.';
  const found = `chi-square ${number(statistic)} on ${freedomText(freedom)}, ${pIs(p)}`;
  const ratio = statistic / freedom;
  const root = number(Math.sqrt(ratio), { digits: 3 });
  const verdict =
    p < 0.05
      ? ratio > 1
        ? 'the cells scatter more than the stated variances allow'
        : 'the cells scatter less than the stated variances imply'
      : 'the scatter does not contradict the stated variances';
  return `The stated variances are judged by the whitened residuals: ${found}; ${verdict}. Were their scale free, it would be ${number(ratio, { digits: 3 })} and every model-based error ${root} times as large.`;
}

/** Model-based and robust errors next to each other. */
export function robustSentence({ plan, fit, robustBeside }: Result): string | null {
  if (robustBeside === null) return null;
  const ratios = robustBeside.flatMap(({ ratioToModel }) => (ratioToModel === null ? [] : [ratioToModel]));
  const byBlocks = tiesCells(plan.variance);
  if (ratios.length === 0)
    return byBlocks
      ? 'Robust errors are undefined with these cells: they need two blocks or more that do not go together, and residuals.'
      : 'Robust errors are undefined with these cells.';
  const [low, high] = [Math.min(...ratios), Math.max(...ratios)];
  const range =
    ratios.length === 1
      ? `is ${number(low, { digits: 3 })} times the model-based one`
      : `are ${number(low, { digits: 3 })} to ${number(high, { digits: 3 })} times the model-based ones`;
  const outside = ratios.filter((ratio) => ratio < 0.67 || ratio > 1.5).length;
  const remark =
    outside === 0
      ? `${ratios.length === 1 ? '' : 'all '}inside 0.67 to 1.5, where the two are taken to agree`
      : `${plural(outside, 'ratio')} outside 0.67 to 1.5: the structure, or a few cells, deserve a second look`;
  const kind =
    fit.inference.kind === 'robust'
      ? ' The table above prints robust errors; these are HC3 beside the model’s own.'
      : '';
  const how = byBlocks
    ? 'CR2, on whitened residuals summed by the blocks of cells that go together'
    : 'HC3, on whitened residuals and leverages';
  return `${ratios.length === 1 ? 'The robust error' : 'Robust errors'} (${how}) ${range}, ${remark}.${kind}`;
}

/** How certain the digits are. */
export function digitsSentence({ fit }: Result): string {
  return `The fit was solved by orthogonal factors and refined in doubled precision: ${number(fit.digits, { decimals: 1 })} digits of the coefficients agree, at a condition number of ${number(fit.condition, { digits: 3 })}.`;
}

/** How the search for variance parameters ended. */
export function searchSentence({ fit }: Result): string | null {
  const free = fit.variance.filter((one) => !one.fixed);
  if (free.length === 0 || fit.startsTried <= 1) return null;
  return `The likelihood was climbed from ${plural(fit.startsTried, 'start')}, and the highest maximum kept${fit.converged ? '' : '; the search did not settle'}.`;
}
