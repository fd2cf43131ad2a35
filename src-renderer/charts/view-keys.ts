import { type View, wholeView } from '@core/figures/plane';
import { movedBy, nearerBy } from '@core/figures/view';

/** What a key does to a view; null where it does nothing. */
export function viewByKey(
  view: View,
  { key, shiftKey }: { readonly key: string; readonly shiftKey: boolean },
): View | null {
  if (key === '+' || key === '=') return nearerBy(view, 1);
  if (key === '-') return nearerBy(view, -1);
  if (key === '0') return wholeView;
  const [across, up] = { ArrowRight: [0.1, 0], ArrowLeft: [-0.1, 0], ArrowUp: [0, 0.1], ArrowDown: [0, -0.1] }[key] ?? [
    0, 0,
  ];
  return shiftKey && (across !== 0 || up !== 0) ? movedBy(view, across as number, up as number) : null;
}
