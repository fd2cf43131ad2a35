import type { BesideResult, FitResult, Result } from '../protocol/result';
import { decimalsBy, number } from './numbers';
import { INDISTINCT } from './prices';
import { structureTexts } from './screen-structure';
import { parameterSign } from './structures';

/** A candidate's log-likelihood less that of the stated structure, by the likelihood of the method; null where one of them has none. */
export function likelihoodDifference(result: Pick<Result, 'fit'>, rival: BesideResult): number | null {
  const key = likelihoodKey(result.fit);
  const own = result.fit[key];
  const theirs = rival[key];
  return own === null || theirs === null ? null : theirs - own;
}

/** The likelihood by which structures are compared: the method's own, the full one for least squares. */
export function likelihoodKey({ estimate }: Pick<FitResult, 'estimate'>): 'logLikelihood' | 'restrictedLogLikelihood' {
  return estimate.method === 'restricted' ? 'restrictedLogLikelihood' : 'logLikelihood';
}

/** Head of the column of differences. */
export function differenceHead(fit: Pick<FitResult, 'estimate'>): string {
  return likelihoodKey(fit) === 'logLikelihood'
    ? 'log-likelihood, difference'
    : 'restricted log-likelihood, difference';
}

/** "−3.25", with "not distinguishable" behind it where the two are less than 2 apart. */
export function differenceText(difference: number | null): { readonly shown: string; readonly remark: string | null } {
  if (difference === null) return { shown: number(null), remark: structureTexts.noLikelihood };
  const size = Math.abs(difference);
  const shown = number(difference, { decimals: 2 });
  return {
    shown: difference > 0 && /[1-9]/.test(shown) ? `+${shown}` : shown,
    remark: size < INDISTINCT ? structureTexts.indistinct : null,
  };
}

/** "φ 82.1, τ² 1.67": a candidate's parameters in a table. */
export function parametersText(parameters: BesideResult['parameters']): string {
  return parameters
    .map(({ name, estimate, low, high, atBoundary }) => {
      const width = low === null || high === null ? null : (high - low) / 4;
      const shown = number(estimate, width === null ? { digits: 3 } : { decimals: decimalsBy(width, estimate) });
      return `${parameterSign(name)} ${shown}${atBoundary ? ' (boundary)' : ''}`;
    })
    .join(', ');
}
