import { pow } from '../numbers/elementary';
import { type View, wholeView } from './plane';

/** As near as one can come: a hundredth of the plane each way. */
const NEAREST = 0.01;
/** One step of plus or minus. */
const STEP = 1.25;

/** A view moved by shares of what is in view; it never leaves the plane altogether. */
export function movedBy(view: View, across: number, up: number): View {
  const [width, height] = [view.right - view.left, view.top - view.bottom];
  const left = within(view.left + across * width, -width / 2, 1 - width / 2);
  const bottom = within(view.bottom + up * height, -height / 2, 1 - height / 2);
  return { left, right: left + width, bottom, top: bottom + height };
}

/** A view nearer (times > 0) or further by so many steps, about a place in it: shares from the lower left corner. Never further than the whole. */
export function nearerBy(
  view: View,
  times: number,
  at: { readonly x: number; readonly y: number } = { x: 0.5, y: 0.5 },
): View {
  const by = pow(STEP, times);
  const width = within((view.right - view.left) / by, NEAREST, 1);
  const height = within((view.top - view.bottom) / by, NEAREST, 1);
  if (width === 1 && height === 1) return wholeView;
  const left = view.left + at.x * (view.right - view.left - width);
  const bottom = view.bottom + at.y * (view.top - view.bottom - height);
  return { left, right: left + width, bottom, top: bottom + height };
}

function within(value: number, low: number, high: number): number {
  return Math.max(low, Math.min(high, value));
}
