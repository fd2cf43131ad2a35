import type { Fitted } from '../estimate/fitted';
import type { BootstrapBoundary, Evidence } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import { bootstrapBoundary } from './bootstrap';
import { LEVEL } from './reading';

/**
 * Draws for the likelihood ratios of vanishing variances among the tests: of tau^2 alone, and wherever no mixture of chi-squares holds. Those that
 * cannot be had are left out.
 */
export function bootstrapsOf(of: {
  readonly fitted: Fitted;
  readonly evidence: readonly Evidence[];
  readonly hooks?: Hooks;
}): BootstrapBoundary[] {
  const { fitted, evidence, hooks } = of;
  const asked = evidence.flatMap(({ test, detail, p }): string[][] => {
    const zero = detail['zero'];
    if (test !== 'boundary-likelihood-ratio' || !Array.isArray(zero)) return [];
    const drawn = p === null || (zero.length === 1 && zero[0] === 'tau2');
    return drawn ? [zero.map(String)] : [];
  });
  return asked.flatMap((zero, i) => {
    if (hooks?.cancelled()) return [];
    const own = hooks && {
      cancelled: hooks.cancelled,
      progress: (step: string, share: number) => hooks.progress(step, (i + share) / asked.length),
    };
    return bootstrapBoundary({ fitted, zero, hooks: own }) ?? [];
  });
}

/** Tests for which no mixture of chi-squares holds, with the p value of their draws. */
export function withBootstraps(evidence: readonly Evidence[], bootstraps: readonly BootstrapBoundary[]): Evidence[] {
  return evidence.map((one) => {
    const zero = one.detail['zero'];
    if (one.test !== 'boundary-likelihood-ratio' || one.p !== null || !Array.isArray(zero)) return one;
    const drawn = bootstraps.find((other) => other.zero.join('\n') === zero.join('\n'));
    if (!drawn) return one;
    const { why: _, ...detail } = one.detail;
    const reading = drawn.p < LEVEL ? 'rejects' : 'does-not-contradict';
    const { statistic, p, replications } = drawn;
    return { ...one, statistic, freedom1: zero.length, p, reading, detail: { ...detail, replications } };
  });
}
