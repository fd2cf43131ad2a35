import type { NamedInput } from '@core/protocol/bridge';
import { type AlsoChanged, type Edited, stateVariance } from '@core/protocol/edit-structure';
import type { Plan, Variance } from '@core/protocol/plan';
import type { Coefficient, Result } from '@core/protocol/result';
import { headlineTerm } from '@core/words/headline';
import { session } from './session.svelte';

/** What a change is called, what it changed, and a file that came with it. */
export interface Change {
  readonly action: string;
  readonly at: string;
  readonly inputs?: readonly NamedInput[];
}

/** What the screens of the analysis share: the coefficient in view, whether the answer is covered, what the last change took along. */
class Analysis {
  #asked = $state<string | null>(null);
  /** What the last change changed besides what was asked for. */
  also = $state.raw<readonly AlsoChanged[]>([]);
  /** Columns of the plan's tables, derived ones included; asked for when a term is to be added. */
  columns = $state.raw<readonly string[]>([]);
  /** Label columns of which every text is a number: cells can stand in their order. */
  orders = $state.raw<readonly string[]>([]);
  #columnsOf: string | null = null;

  /** The plan looked at, once its structure is stated. */
  readonly plan: Plan | null = $derived(
    session.plan !== null && session.plan.variance !== null && session.plan.estimate !== null
      ? (session.plan as Plan)
      : null,
  );
  readonly covered: boolean = $derived(session.project?.covered ?? false);
  /** The coefficient that prices, beam, scan and influence are told for. */
  readonly term: string | null = $derived(termInView(session.result, this.#asked));
  readonly own: Coefficient | null = $derived(
    session.result?.fit.coefficients.find(({ term }) => term === this.term) ?? null,
  );
  /** The figures on the screen are of a plan before the one that stands. */
  readonly stale: boolean = $derived(
    this.plan !== null && session.result !== null && JSON.stringify(session.result.plan) !== JSON.stringify(this.plan),
  );

  /** States another structure; the one that stood stays beside, unless its fit was refused for what it says. */
  async state(variance: Variance, how: Change): Promise<void> {
    if (this.plan === null) return;
    const refused = session.problems.some(({ at }) => at === '/variance' || at?.startsWith('/variance/') === true);
    await this.change(stateVariance(this.plan, variance, { refused }), how);
  }

  look(term: string): void {
    this.#asked = term;
  }

  /** Sends a changed plan on its way, and keeps what else it changed for the line that says so. */
  async change(edited: Edited | Plan, how: Change): Promise<boolean> {
    const { plan, also } = 'plan' in edited ? edited : { plan: edited, also: [] };
    this.also = also;
    return session.change(plan, how);
  }

  /** Learns the columns at hand; they are known already while the data stand as they stood. */
  async learnColumns(): Promise<void> {
    const plan = session.plan;
    if (plan === null) return;
    const label = plan.roles.label ?? [];
    const of = JSON.stringify([plan.data, label, session.inputs]);
    if (of === this.#columnsOf) return;
    const look = await session.ask('data.look', { plan, inputs: [...session.inputs] });
    if (look === null) return;
    this.columns = look.columns;
    this.orders = label.filter((_, k) => (look.packed.keys[k] ?? []).every(isNumber));
    this.#columnsOf = of;
  }
}

function isNumber(text: string): boolean {
  return /^[-+]?\d+([.,]\d+)?$/.test(text.trim());
}

function termInView(result: Result | null, asked: string | null): string | null {
  if (result === null) return null;
  return result.fit.coefficients.some(({ term }) => term === asked) ? asked : headlineTerm(result);
}

export const analysis = new Analysis();
