import type { VarianceParameter } from '../protocol/result';
import { decimalsBy, exact, levelText, number, rangeText } from './numbers';

/** An estimated variance parameter inside a sentence: "0.70 (95 % interval 0.15 to 1.96)". */
export function parameterText(one: VarianceParameter | undefined, level: number): string {
  if (one === undefined || one.estimate === null) return 'a value that these cells leave undefined';
  if (one.fixed) return `${exact(one.estimate)}, set by the plan`;
  const width = one.low === null || one.high === null ? null : (one.high - one.low) / 4;
  // Two digits of the estimate are told even where its interval is wide.
  const decimals = Math.min(
    decimalsBy(width, one.estimate) + 2,
    Math.max(decimalsBy(width, one.estimate), decimalsBy(one.estimate)),
  );
  const shown = number(one.estimate, width === null ? { digits: 3 } : { decimals });
  if (one.atBoundary)
    return `${one.estimate === 0 ? '0' : shown} (at its boundary${one.high === null ? '' : `; up to ${number(one.high, { digits: 2 })} by the ${levelText(level)} interval`})`;
  if (width === null) return shown;
  return `${shown} (${levelText(level)} interval ${rangeText(one.low, one.high, decimals)})`;
}
