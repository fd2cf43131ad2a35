import type { Answers } from '@core/protocol/bridge';
import type { Problem } from '@core/protocol/problems';
import { ask } from '../../state/ask';
import type { Paper } from './paper';

/** The pages that the screen shows: asked for anew whenever the plan, its fit or the chosen edition changes. */
export class Pages {
  paper = $state.raw<Paper | null>(null);
  printed = $state.raw<Answers['report.pages'] | null>(null);
  /** Number of the page that is shown. */
  at = $state(1);
  setting = $state(false);
  /** What the pages are of, as their asker named it; null for none. */
  of = $state<string | null>(null);
  problems = $state.raw<readonly Problem[]>([]);
  /** The bytes are there, but could not be drawn. */
  undrawn = $state(false);
  /** Setting them was stopped by hand. */
  stopped = $state(false);
  #turn = 0;

  /** name: what the pages are of, for `of`. */
  async fetch({ planId, edition, name }: { planId: number; edition: number | null; name: string }): Promise<void> {
    const turn = ++this.#turn;
    this.setting = true;
    this.stopped = false;
    const outcome = await ask('report.pages', { planId, edition });
    if (turn !== this.#turn) return;
    if (outcome.ok) await this.#take(outcome.value, turn);
    else {
      this.problems = outcome.problems.filter(({ code }) => code !== 'cancelled');
      this.stopped = this.problems.length === 0;
    }
    if (turn !== this.#turn) return;
    this.setting = false;
    if (outcome.ok) this.of = name;
  }

  turnTo(page: number): void {
    this.at = Math.max(1, Math.min(this.paper?.pages ?? 1, page));
  }

  close(): void {
    this.#turn++;
    this.paper?.close();
    this.paper = this.printed = this.of = null;
    this.setting = false;
  }

  async #take(printed: Answers['report.pages'], turn: number): Promise<void> {
    this.printed = printed;
    this.problems = [];
    const before = this.paper;
    const paper = await import('./paper').then(({ openPaper }) => openPaper(printed.pdf)).catch(() => null);
    if (turn !== this.#turn) return paper?.close();
    this.undrawn = paper === null;
    this.paper = paper;
    this.turnTo(this.at);
    before?.close();
  }
}
