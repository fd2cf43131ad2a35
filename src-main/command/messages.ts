import type { Problem } from '@core/protocol/problems';
import type { Caution } from '@core/protocol/result';
import { cautionSentence } from '@core/words/cautions';
import { sentence } from '@core/words/problems';

/** What the command line says on standard error: text, or one JSON object a line. */
export interface Messages {
  readonly problems: (problems: readonly Problem[]) => void;
  readonly cautions: (cautions: readonly Caution[]) => void;
  readonly progress: (step: string, share: number) => void;
  /** Ends a line of progress that stands open. */
  readonly close: () => void;
}

interface Screen {
  readonly write: (text: string) => void;
  readonly isTerminal: boolean;
}

interface Line {
  readonly level: 'error' | 'caution' | 'progress';
  readonly code: string;
  readonly at: string | null;
  readonly facts: object;
  readonly text: string;
}

export function messagesAsJson({ write, isTerminal }: Screen): Messages {
  const line = (message: Line) => write(`${JSON.stringify(message)}\n`);
  return {
    problems: (problems) => {
      for (const p of problems) line({ level: 'error', code: p.code, at: p.at, facts: p.facts, text: sentence(p) });
    },
    cautions: (cautions) => {
      for (const c of cautions)
        line({ level: 'caution', code: c.code, at: null, facts: c.facts, text: cautionSentence(c) });
    },
    progress: (step, share) => {
      if (isTerminal) line({ level: 'progress', code: step, at: null, facts: { share }, text: step });
    },
    close: () => {},
  };
}

export function messagesAsText({ write, isTerminal }: Screen): Messages {
  let open = false;
  const close = () => {
    if (open) write('\r\u001b[K');
    open = false;
  };
  return {
    problems: (problems) => {
      close();
      for (const p of problems) write(`${p.at ? `${p.at}: ` : ''}${sentence(p)}\n`);
    },
    cautions: (cautions) => {
      close();
      for (const c of cautions) if (c.group !== 'for-record') write(`${cautionSentence(c)}\n`);
    },
    progress: (step, share) => {
      if (!isTerminal) return;
      write(`\r\u001b[K${step} ${Math.round(100 * share)} %`);
      open = true;
    },
    close,
  };
}
