import { filesOf, readPlan } from '@core/index';
import type { NamedInput } from '@core/protocol/bridge';
import { done, type Outcome, problem, refuse, refuseAll } from '@core/protocol/outcome';
import type { Plan } from '@core/protocol/plan';
import type { WindowState } from './window-state';

/** A plan from the page: in its normal form, as the command line reads it from a file, and as the text of that. */
export interface PlanIn {
  readonly plan: Plan;
  readonly text: string;
}

/** Refuses what `readPlan` refuses, with places in the plan; what is no JSON value at all is `not-json`. */
export function planIn(value: unknown): Outcome<PlanIn> {
  const text = jsonOf(value);
  if (text === null) return refuse('not-json', { line: 1, column: 1 }, '');
  const read = readPlan(text);
  return read.ok ? done({ plan: read.value, text: JSON.stringify(read.value) }) : read;
}

function jsonOf(value: unknown): string | null {
  try {
    return JSON.stringify(value) ?? null;
  } catch {
    return null; // circular, too deep, or a number that JSON does not have
  }
}

/** Those of some files that are at hand: the others are refused at their places, with all else that the data stage finds. */
export function atHand(state: WindowState, inputs: readonly NamedInput[]): readonly NamedInput[] {
  return inputs.filter(({ sha256 }) => state.has(sha256));
}

/** The files that a plan names, as given or else as the plan had them. Refusal: `file-not-found`, at the place of each that is not at hand. */
export function inputsOf(
  state: WindowState,
  plan: Plan,
  { given, before }: { readonly given: readonly NamedInput[]; readonly before: readonly NamedInput[] },
): Outcome<readonly NamedInput[]> {
  const hashes = new Map([...before, ...given].map(({ name, sha256 }) => [name, sha256]));
  const named = new Map(filesOf(plan).map(({ file, at }) => [file, at]));
  const inputs: NamedInput[] = [];
  const missing = [...named].filter(([name]) => {
    const sha256 = hashes.get(name);
    if (sha256 === undefined || !state.has(sha256)) return true;
    inputs.push({ name, sha256 });
    return false;
  });
  if (missing.length === 0) return done(inputs);
  return refuseAll(missing.map(([file, at]) => problem('file-not-found', { file }, at)));
}

/** A text that somebody has to say, without outer spaces. Refusal: nothing but spaces. */
export function said(text: string, key: string): Outcome<string> {
  const bare = text.trim();
  return bare === '' ? refuse('must-be-stated', { key, choices: null }, `/${key}`) : done(bare);
}
