import { exp } from '../numbers/elementary';
import type { Plan } from '../protocol/plan';
import type { Interval, QuestionResult, Result } from '../protocol/result';
import { interceptName } from '../protocol/term-names';
import { expectRows, ownScaleSentence } from '../words/questions';
import { factorSentence } from '../words/summary';

/**
 * An estimate on the scale of the fit with its ends, taken back to the outcome's own unit; null where the fit is on that already.
 *
 *     log  e^x        logit  1 / (1 + e^-x);  times 100 for percent
 *
 * Ends that are null stay null. Example: a logit of 0 is a share of .5.
 */
export function onOwnScale({ outcomeScale, roles }: Plan, of: Interval): Interval | null {
  if (outcomeScale === 'identity') return null;
  const whole = roles.outcomeUnit === 'percent' ? 100 : 1;
  const back = (x: number): number => whole * (outcomeScale === 'log' ? exp(x) : shareAt(x));
  return each(of, back);
}

/** A difference on the log or logit scale as a factor of the outcome, or of its odds; null on the identity scale. */
export function asFactor({ outcomeScale }: Plan, of: Interval): Interval | null {
  return outcomeScale === 'identity' ? null : each(of, exp);
}

/** What an answer on the log or logit scale says of the outcome itself, in words; null on the identity scale, and of tests. */
export function ownScaleAnswer(result: Result, { question, answer }: QuestionResult): string | null {
  const { plan } = result;
  if ('statistic' in answer) return null;
  if ('fitted' in answer) {
    const names = expectRows(question);
    const told = [
      [null, answer.fitted],
      [names.newCellObserved, answer.newCellObserved],
    ] as const;
    const sentences = told.flatMap(([what, one]) => {
      const own = one && onOwnScale(plan, one);
      return own ? [ownScaleSentence(result, what, own)] : [];
    });
    return sentences.length > 0 ? sentences.join(' ') : null;
  }
  const isDifference =
    (question.kind === 'average' && question.minus !== null) ||
    (question.kind === 'combination' && !Object.hasOwn(question.of, interceptName));
  const own = isDifference ? asFactor(plan, answer) : question.kind === 'average' ? onOwnScale(plan, answer) : null;
  if (!own) return null;
  return isDifference ? factorSentence(result, own) : ownScaleSentence(result, null, own);
}

function shareAt(x: number): number {
  return x < 0 ? exp(x) / (1 + exp(x)) : 1 / (1 + exp(-x));
}

/** What runs over is told as null. */
function each({ estimate, low, high }: Interval, back: (x: number) => number): Interval | null {
  const own = back(estimate);
  if (!Number.isFinite(own)) return null;
  const end = (x: number | null): number | null => (x === null || !Number.isFinite(back(x)) ? null : back(x));
  return { estimate: own, low: end(low), high: end(high) };
}
