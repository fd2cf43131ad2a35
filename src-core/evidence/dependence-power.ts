import { normalUpper, normalUpperQuantile } from '../numbers/distributions';
import type { Frame } from './frame';
import type { Moments } from './moran';
import type { Pairs } from './pairs';
import { LEVEL } from './reading';

/**
 * P(I above its upper critical value) with r'(B - c) r taken as normal: exact mean, spread without the model's share.
 *
 *     mean  tr(MB) - c (G-k) + rho (tr(MBMB) - c tr(MB));  spread  2 tr[((B - c)(I + rho B))^2]
 */
export function largeSamplePower(
  known: {
    readonly frame: Pick<Frame, 'count' | 'freedom'>;
    readonly pairs: Pairs;
    readonly moments: Moments & { readonly variance: number };
  },
  rho: number,
): number {
  const { frame, pairs, moments } = known;
  const { expectation, variance, trace, traceOfSquare } = moments;
  const scale = frame.count / pairs.total;
  const c = (expectation + normalUpperQuantile(LEVEL / 2) * Math.sqrt(variance)) / scale;
  const mean = trace - c * frame.freedom + rho * (traceOfSquare - c * trace);
  const powers = tracesOf(pairs);
  const linear = 1 - c * rho;
  const square =
    c * c * frame.count +
    (linear * linear - 2 * c * rho) * pairs.total +
    2 * linear * rho * powers.third +
    rho * rho * powers.fourth;
  return normalUpper(-mean / Math.sqrt(2 * square));
}

/** tr B^3 and tr B^4. */
function tracesOf({ groups, partners }: Pairs): { third: number; fourth: number } {
  let third = 0;
  let fourth = 0;
  for (const { length } of groups ?? []) {
    const rest = length - 1;
    third += rest * rest * rest - rest;
    fourth += rest * rest * rest * rest + rest;
  }
  for (const [g, cells] of (partners ?? []).entries()) {
    const twoSteps = new Map<number, number>();
    for (const h of cells) for (const i of partners?.[h] ?? []) twoSteps.set(i, (twoSteps.get(i) ?? 0) + 1);
    for (const ways of twoSteps.values()) fourth += ways * ways;
    for (const h of partners?.[g] ?? []) third += twoSteps.get(h) ?? 0;
  }
  return { third, fourth };
}
