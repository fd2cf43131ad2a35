import { type Snippet, tick } from 'svelte';

/** What stands open in the margin: the choices of one phrase, beside the line that holds it. */
interface Opened {
  readonly id: string;
  /** The passage in whose margin it opens. */
  readonly host: symbol;
  readonly panel: Snippet;
  readonly trigger: HTMLElement;
  /** How far below the top of its passage the phrase's line stands, in pixels. */
  readonly top: number;
  readonly title: string;
}

class Margin {
  opened = $state.raw<Opened | null>(null);

  open(opened: Opened): void {
    this.opened = opened;
  }

  /** Closes the margin; focus goes back to the phrase, unless something else has taken it. */
  async close({ focus = true }: { readonly focus?: boolean } = {}): Promise<void> {
    const trigger = this.opened?.trigger;
    this.opened = null;
    await tick();
    if (focus && trigger?.isConnected) trigger.focus();
  }
}

/** One margin: opening one thing closes the other. */
export const margin = new Margin();
