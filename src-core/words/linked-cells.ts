import type { Correlation, Part, Plan } from '../protocol/plan';
import type { Result } from '../protocol/result';
import { list } from './numbers';
import { parameterText } from './parameter-text';
import { structureName } from './structures';

type Spoken = Pick<Result, 'plan' | 'fit'>;

/** How cells go together under the structure, and which are taken as independent; null where all are. */
export function linkedSentence({ plan, fit }: Spoken): string | null {
  const { parts } = plan.variance;
  const phrases = parts.flatMap((part) => phraseOf(part, { plan, fit }) ?? []);
  if (phrases.length === 0) return null;
  const start = `Cells are not taken as independent: ${phrases.join('; ')}.`;
  const groups = [...new Set(parts.flatMap((part) => groupOf(part) ?? []))];
  if (parts.some(({ kind }) => kind === 'matrix') || groups.length === 0) return start;
  return `${start} Cells that share no ${list(groups, 'or')} are independent of each other by assumption.`;
}

function correlationOf(part: Part): Correlation | null {
  return 'correlation' in part ? part.correlation : null;
}

/** What two cells must have in common to go together: "district", "district and year"; null where the part ties none, or all. */
function groupOf(part: Part): string | null {
  const by = part.kind === 'shared' ? part.by : (correlationOf(part)?.by ?? []);
  return by.length === 0 ? null : by.join(' and ');
}

function phraseOf(part: Part, { plan, fit }: Spoken): string | null {
  if (part.kind === 'matrix') return 'they are correlated as the supplied matrix says';
  if (part.kind === 'shared') return `those of the same ${part.by.join(' and ')} share a common shock`;
  const correlation = correlationOf(part);
  if (correlation === null) return null;
  const own =
    plan.variance.parts.length === 1 ? '' : ` in their part “${structureName({ parts: [bare(part)], fixed: {} })}”`;
  const value = parameterText(
    fit.variance.find(({ name }) => name === `rho: ${part.kind}`),
    fit.inference.level,
  );
  const whose = correlation.by.length === 0 ? 'all of them' : `those of the same ${correlation.by.join(' and ')}`;
  return correlation.kind === 'exchangeable'
    ? `${whose} are correlated${own}, each pair by ${value}`
    : `${whose} are correlated${own} by ${value} at a distance of 1 in ${correlation.order}, raised to the distance of farther ones`;
}

function bare(part: Part): Part {
  return 'correlation' in part ? { ...part, correlation: null } : part;
}

/** The covariance of two cells as an equation, and in words; null where cells are independent. */
export function covarianceEquation({
  plan,
}: {
  readonly plan: Pick<Plan, 'variance'>;
}): { readonly text: string; readonly spoken: string } | null {
  const { parts } = plan.variance;
  const signs = parts.map(covarianceSigns).filter((one) => one !== null);
  if (signs.length === 0) return null;
  return {
    text: `Cov(u_g, u_h) = ${signs.map(([sign]) => sign).join(' + ')}`,
    spoken: `The covariance of the errors of two cells g and h is ${signs.map(([, words]) => words).join(' plus ')}`,
  };
}

function covarianceSigns(part: Part): readonly [string, string] | null {
  if (part.kind === 'matrix') {
    const free = part.scale === 'free';
    return [free ? 'φ S_gh' : 'S_gh', `${free ? 'phi times ' : ''}the entry of the supplied matrix`];
  }
  if (part.kind === 'shared') {
    const by = part.by.join(' × ');
    return [`ω² [same ${by}]`, `omega squared where both have the same ${part.by.join(' and ')}`];
  }
  const correlation = correlationOf(part);
  if (correlation === null) return null;
  const same = correlation.by.length === 0 ? '' : ` [same ${correlation.by.join(' × ')}]`;
  const within = correlation.by.length === 0 ? '' : ` where both have the same ${correlation.by.join(' and ')}`;
  const root = part.kind === 'between' ? 'τ²' : '√(v_g v_h)';
  const spokenRoot =
    part.kind === 'between' ? 'tau squared' : `the root of the product of their variances in the part ${part.kind}`;
  return correlation.kind === 'exchangeable'
    ? [`ρ ${root}${same}`, `rho times ${spokenRoot}${within}`]
    : [
        `ρ^|Δ${correlation.order}| ${root}${same}`,
        `rho to the power of their distance in ${correlation.order} times ${spokenRoot}${within}`,
      ];
}
