/**
 * A JSON pointer one or more steps below another.
 *
 *     below('/questions/0/of', '1/room')   // '/questions/0/of/1~1room'
 *
 * Source: RFC 6901.
 */
export function below(at: string, ...steps: readonly (string | number)[]): string {
  return steps.reduce<string>((path, step) => `${path}/${String(step).replace(/~/g, '~0').replace(/\//g, '~1')}`, at);
}

/** The steps of a JSON pointer, escapes undone. */
export function stepsOf(at: string): string[] {
  return at
    .split('/')
    .slice(1)
    .map((step) => step.replace(/~1/g, '/').replace(/~0/g, '~'));
}

/** Whether a pointer leads to a place or to something inside it. */
export function isWithin(at: string, place: string): boolean {
  return at === place || at.startsWith(`${place}/`);
}

/** Compares two pointers by where they stand in a document: an object before what it holds, a key before the keys after it. */
export function inDocumentOrder(document: unknown): (one: string, other: string) => number {
  return (one, other) => {
    const [left, right] = [stepsOf(one), stepsOf(other)];
    let holder = document;
    for (let i = 0; i < Math.min(left.length, right.length); i++) {
      const [l, r] = [left[i] as string, right[i] as string];
      if (l !== r) return placeIn(holder, l) - placeIn(holder, r);
      holder = isObject(holder) && Object.hasOwn(holder, l) ? (holder as Record<string, unknown>)[l] : null;
    }
    return left.length - right.length;
  };
}

function placeIn(holder: unknown, key: string): number {
  return isObject(holder) ? Object.keys(holder).indexOf(key) : -1;
}

function isObject(value: unknown): value is object {
  return typeof value === 'object' && value !== null;
}
