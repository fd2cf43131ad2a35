import type { CellResult } from '../protocol/result';
import { number, percent, plural } from './numbers';

export const armTexts = {
  name: 'The arm: every used cell by its share of the weight',
  none: 'No fit yet: the arm shows the used cells once the variance is stated.',
  heavy: 'heaviest',
  light: 'lightest',
  help: 'Point at a tick, or walk along it with the arrow keys: that cell is then marked on every screen.',
} as const;

/** The marked cell as a line: its share of the weight and its whitened residual. */
export function armText({ label, weightShare, whitened }: CellResult): string {
  return `${label}: ${percent(weightShare)} of the weight, whitened residual ${number(whitened, { decimals: 2 })}`;
}

/** What the arm shows while no cell is marked. */
export function armSummary(cells: readonly CellResult[]): string {
  const shares = cells.map((cell) => cell.weightShare).sort((a, b) => b - a);
  return `${plural(cells.length, 'cell')}; the heaviest has ${percent(shares[0] ?? null)} of the weight, the lightest ${percent(shares.at(-1) ?? null)}.`;
}
