import type { Evidence } from '../protocol/result';
import type { Frame } from './frame';
import { evidenceOf, notApplicable } from './reading';
import { MOST_CELLS, shapiroWilk } from './shapiro-wilk';

/** Shapiro-Wilk's W of the whitened residuals; not applicable below 3 and above 5000 cells. detail: cells. */
export function normalityOf(frame: Frame): Evidence {
  const test = 'shapiro-wilk';
  const detail = { cells: frame.count };
  if (frame.count < 3) return notApplicable(test, 'too-few-cells', detail);
  if (frame.count > MOST_CELLS) return notApplicable(test, 'too-many-cells', detail);
  const found = shapiroWilk(frame.residuals);
  if (!found) return notApplicable(test, 'no-variation', detail);
  return evidenceOf(test, { statistic: found.w, p: found.p, detail });
}
