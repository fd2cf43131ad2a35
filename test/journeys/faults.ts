// What can be wrong with a screen for someone who enlarges it, cannot use a mouse, or does not see it; each is told as a line of text.
import axe from 'axe-core';
import type { Page } from 'playwright-core';

interface AxeDoor {
  readonly axe: {
    readonly run: (options: object) => Promise<{
      violations: readonly { id: string; nodes: readonly { target: unknown; failureSummary: string }[] }[];
    }>;
  };
}

/** What axe finds at WCAG 2.2, levels A and AA. */
export async function axeFaults(page: Page): Promise<string[]> {
  if (!(await page.evaluate(() => 'axe' in window))) await page.evaluate(axe.source);
  return page.evaluate(async () => {
    const values = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'];
    const { violations } = await (window as unknown as AxeDoor).axe.run({ runOnly: { type: 'tag', values } });
    return violations.flatMap(({ id, nodes }) =>
      nodes.map(({ target, failureSummary }) => `${id}: ${JSON.stringify(target)} ${failureSummary}`),
    );
  });
}

/** Text that is cut off, that lies over other text, or that can be reached only by scrolling sideways. */
export function layoutFaults(page: Page): Promise<string[]> {
  return page.evaluate(() => {
    const faults: string[] = [];
    const root = document.scrollingElement as Element;
    if (root.scrollWidth > innerWidth + 1) faults.push(`the page is ${root.scrollWidth} wide`);
    const main = document.querySelector('main') as Element;
    if (main.scrollWidth > main.clientWidth + 1) faults.push(`main is ${main.scrollWidth} wide in ${main.clientWidth}`);

    interface Piece {
      readonly text: string;
      readonly at: Element;
      readonly box: DOMRect;
      /** Head, arm and what scrolls between them are layers that may pass under each other. */
      readonly layer: string;
    }
    const pieces: Piece[] = [];
    const walker = document.createTreeWalker(document.body, NodeFilter.SHOW_TEXT);
    for (let node = walker.nextNode(); node !== null; node = walker.nextNode()) {
      const at = node.parentElement as Element;
      const text = node.textContent?.trim() ?? '';
      if (text === '' || at.closest('svg, math, .words, .unseen, .skip, option, script, style') !== null) continue;
      if (!at.checkVisibility({ visibilityProperty: true, opacityProperty: true })) continue;
      const range = document.createRange();
      range.selectNodeContents(node);
      const layer = at.closest('dialog, .governing, header.head, footer')?.tagName ?? 'main';
      for (const box of range.getClientRects())
        if (box.width > 1 && box.height > 1) pieces.push({ text: text.slice(0, 40), at, box, layer });
    }

    for (const { text, at, box } of pieces) {
      let scrolls = false;
      for (let up: Element | null = at; up !== null && up !== document.body; up = up.parentElement) {
        const { overflowX, overflowY, textOverflow } = getComputedStyle(up);
        if (textOverflow === 'ellipsis' && up.scrollWidth > up.clientWidth) faults.push(`“${text}” is cut with dots`);
        const frame = up.getBoundingClientRect();
        if (/auto|scroll/.test(overflowX)) scrolls ||= up.scrollWidth > up.clientWidth + 1;
        if (/hidden|clip/.test(overflowX) && (box.right > frame.right + 1.5 || box.left < frame.left - 1.5))
          faults.push(`“${text}” is cut at a side`);
        if (/hidden|clip/.test(overflowY) && (box.bottom > frame.bottom + 3 || box.top < frame.top - 3))
          faults.push(`“${text}” is cut above or below`);
      }
      if (!scrolls && (box.right > innerWidth + 1 || box.left < -1))
        faults.push(`“${text}” leaves the window sideways`);
    }

    const sorted = pieces.toSorted((a, b) => a.box.top - b.box.top);
    for (const [i, one] of sorted.entries())
      for (let k = i + 1; k < sorted.length; k++) {
        const other = sorted[k] as Piece;
        if (other.box.top > one.box.bottom - 4) break;
        if (other.layer !== one.layer) continue;
        const across = Math.min(one.box.right, other.box.right) - Math.max(one.box.left, other.box.left);
        const down = Math.min(one.box.bottom, other.box.bottom) - other.box.top;
        // Boxes of lines are as high as their leading: neighbours may touch, not lie on each other.
        if (across > 2 && down > 0.4 * Math.min(one.box.height, other.box.height))
          faults.push(`“${one.text}” and “${other.text}” overlap by ${Math.round(across)} × ${Math.round(down)}`);
      }
    return [...new Set(faults)];
  });
}

const interactive =
  'a[href], button, input, select, textarea, summary, [role=button], [role=slider], [role=checkbox], [role=radio]';

/** What can be pressed but is smaller than 24 by 24, unless it stands in a line of text or has room around it. */
export function targetFaults(page: Page): Promise<string[]> {
  return page.evaluate((selector) => {
    const SIDE = 24;
    const targets = [...document.querySelectorAll<HTMLElement>(selector)].filter(
      (one) => one.checkVisibility({ visibilityProperty: true }) && one.closest('.skip, .unseen') === null,
    );
    // What is scrolled under the head or the arm cannot be pressed there.
    const layerOf = (one: HTMLElement) => one.closest('dialog, .governing, header.head, footer, main');
    const boxOf = (one: HTMLElement): DOMRect => {
      const own = one.getBoundingClientRect();
      const label = one instanceof HTMLInputElement && /checkbox|radio/.test(one.type) ? one.closest('label') : null;
      return label?.getBoundingClientRect() ?? own;
    };
    const inLine = (one: HTMLElement): boolean =>
      getComputedStyle(one).display.startsWith('inline') &&
      [...(one.parentElement?.childNodes ?? [])].some(
        (node) => node.nodeType === Node.TEXT_NODE && (node.textContent?.trim() ?? '') !== '',
      );
    const small = targets.filter((one) => {
      const { width, height } = boxOf(one);
      return (width < SIDE - 0.5 || height < SIDE - 0.5) && !inLine(one);
    });
    return small
      .filter((one) => {
        const { left, top, width, height } = boxOf(one);
        const [x, y] = [left + width / 2, top + height / 2];
        return targets.some((other) => {
          if (other === one || other.contains(one) || one.contains(other) || layerOf(other) !== layerOf(one))
            return false;
          const box = boxOf(other);
          const isSmall = small.includes(other);
          if (isSmall) return Math.hypot(box.left + box.width / 2 - x, box.top + box.height / 2 - y) < SIDE;
          const [dx, dy] = [Math.max(box.left - x, 0, x - box.right), Math.max(box.top - y, 0, y - box.bottom)];
          return Math.hypot(dx, dy) < SIDE / 2;
        });
      })
      .map((one) => {
        const { width, height } = boxOf(one);
        return `${one.tagName.toLowerCase()} “${(one.innerText || one.ariaLabel || '').slice(0, 40)}” is ${Math.round(width)} × ${Math.round(height)}`;
      });
  }, interactive);
}

/** Goes through the screen by the Tab key: what is not reached, is not seen to have the focus, or is hidden while it has it. */
export async function focusFaults(page: Page): Promise<string[]> {
  const all = await page.evaluate((selector) => {
    (document.activeElement as HTMLElement | null)?.blur();
    const stops = [...document.querySelectorAll<HTMLElement>(`${selector}, [tabindex="0"]`)].filter(
      (one) =>
        one.tabIndex >= 0 && !(one as HTMLButtonElement).disabled && one.checkVisibility({ visibilityProperty: true }),
    );
    for (const [i, one] of stops.entries()) one.dataset['stop'] = String(i);
    scrollTo(0, 0);
    return stops.length;
  }, interactive);
  const faults: string[] = [];
  const reached = new Set<string>();
  for (let presses = 0; presses < all + 20; presses++) {
    await page.keyboard.press('Tab');
    const found = await page.evaluate(() => {
      const one = document.activeElement as HTMLElement;
      if (one === document.body) return null;
      const name = `${one.tagName.toLowerCase()} “${(one.innerText || one.ariaLabel || one.id).trim().slice(0, 40)}”`;
      const { outlineStyle, outlineWidth } = getComputedStyle(one);
      const seen = outlineStyle !== 'none' && Number.parseFloat(outlineWidth) >= 2;
      const [box] = one.getClientRects();
      if (!box) return { stop: one.dataset['stop'], name, seen, shown: 0 };
      // Of what scrolls, the part that is scrolled into sight counts; what lies over that part hides it.
      const frame = one.closest('main')?.getBoundingClientRect() ?? new DOMRect(0, 0, innerWidth, innerHeight);
      const [left, right] = [Math.max(0, frame.left, box.left + 1), Math.min(innerWidth, frame.right, box.right - 1)];
      const [top, bottom] = [Math.max(0, frame.top, box.top + 1), Math.min(innerHeight, frame.bottom, box.bottom - 1)];
      const isTall = box.height > innerHeight / 2;
      let shown = 0;
      for (const x of [0.1, 0.5, 0.9])
        for (const y of [0.1, 0.5, 0.9]) {
          const there = document.elementFromPoint(left + x * (right - left), top + y * (bottom - top));
          if (there !== null && (one === there || one.contains(there) || there.contains(one))) shown++;
        }
      return {
        stop: one.dataset['stop'],
        name,
        seen,
        shown: bottom > top && right > left ? (isTall && shown > 0 ? 1 : shown / 9) : 0,
      };
    });
    if (found === null) continue;
    if (found.stop !== undefined && reached.has(found.stop)) break;
    if (found.stop !== undefined) reached.add(found.stop);
    if (!found.seen) faults.push(`${found.name} does not show the focus`);
    if (found.shown < 0.5) faults.push(`${found.name} is hidden while it has the focus`);
  }
  const missed = await page.evaluate(
    (stops) =>
      [...document.querySelectorAll<HTMLElement>('[data-stop]')]
        .filter(
          (one) =>
            !stops.includes(one.dataset['stop'] as string) &&
            one.checkVisibility({ visibilityProperty: true }) &&
            !(one instanceof HTMLInputElement && one.type === 'radio'),
        )
        .map(
          (one) =>
            `${one.tagName.toLowerCase()} “${(one.innerText || one.ariaLabel || '').trim().slice(0, 40)}” is not reached`,
        ),
    [...reached],
  );
  await page.evaluate(() => {
    for (const one of document.querySelectorAll<HTMLElement>('[data-stop]')) delete one.dataset['stop'];
  });
  return [...faults, ...missed];
}

/** What still moves where the reader asked for rest. */
export function motionFaults(page: Page): Promise<string[]> {
  return page.evaluate(() => [
    ...document.getAnimations().map((one) => `an animation runs: ${(one as CSSAnimation).animationName ?? one.id}`),
    ...[...document.querySelectorAll('body *')]
      .filter((one) => {
        const { transitionDuration, animationName } = getComputedStyle(one);
        return animationName !== 'none' || transitionDuration.split(',').some((text) => Number.parseFloat(text) > 0);
      })
      .map((one) => `${one.tagName.toLowerCase()}.${one.className} is set to move`),
  ]);
}
