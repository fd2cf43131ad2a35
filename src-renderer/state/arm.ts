import type { CellResult } from '@core/protocol/result';

/** One tick of the arm. x: 0 at the fulcrum to 1; height: −1 to 1 of the room above or below. */
export interface Tick {
  readonly label: string;
  readonly x: number;
  readonly height: number;
  readonly cell: CellResult;
}

/** Residuals beyond this many units are drawn no taller. */
const TALLEST = 4;

/** The used cells as ticks, heaviest first: place by the logarithm of the share of the weight, height by the whitened residual. */
export function ticksOf(cells: readonly CellResult[]): readonly Tick[] {
  const sorted = cells.filter(({ weightShare }) => weightShare > 0).toSorted((a, b) => b.weightShare - a.weightShare);
  const far = (cell: CellResult | undefined) => -Math.log(cell?.weightShare ?? 1);
  const [near, end] = [far(sorted[0]), far(sorted.at(-1))];
  const tallest = Math.max(1, ...sorted.map(({ whitened }) => Math.min(TALLEST, Math.abs(whitened))));
  return sorted.map((cell) => ({
    label: cell.label,
    x: end > near ? (far(cell) - near) / (end - near) : 0,
    height: Math.max(-TALLEST, Math.min(TALLEST, cell.whitened)) / tallest,
    cell,
  }));
}

/** The tick that is nearest to a place of the arm, found in ticks that rise in x. */
export function nearestTick(ticks: readonly Tick[], x: number): Tick | null {
  let [low, high] = [0, ticks.length - 1];
  while (low < high) {
    const middle = (low + high) >> 1;
    if ((ticks[middle] as Tick).x < x) low = middle + 1;
    else high = middle;
  }
  const [before, after] = [ticks[low - 1], ticks[low]];
  if (!before || !after) return after ?? before ?? null;
  return x - before.x <= after.x - x ? before : after;
}
