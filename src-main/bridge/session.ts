import { resolve } from 'node:path';
import type { Worker } from 'node:worker_threads';
import type { Handlers } from './answer';
import { dataHandlers } from './data';
import type { Desk } from './desk';
import { fitHandlers } from './fits';
import { keepHandlers } from './keep';
import { planHandlers } from './plans';
import { projectHandlers } from './projects';
import { reportHandlers } from './report';
import { startHandlers } from './start';
import { trailHandlers } from './trail';
import { WindowState } from './window-state';

export interface Session {
  readonly handlers: Handlers;
  /** A project named on the command line: the page may open it by name from now on. */
  readonly offer: (file: string) => void;
  /** Cancels what is under way and closes the project: everything accepted is in its file. */
  readonly close: () => Promise<void>;
}

/** Opens the session of one window. start: starts the engine's thread. */
export function openSession(desk: Desk, start?: () => Worker): Session {
  const state = new WindowState(desk, start);
  return {
    handlers: {
      ...startHandlers(state),
      ...projectHandlers(state),
      ...dataHandlers(state),
      ...planHandlers(state),
      ...fitHandlers(state),
      ...reportHandlers(state),
      ...trailHandlers(state),
      ...keepHandlers(state),
    },
    offer: (file) => void state.offered.add(resolve(file)),
    close: () => state.close(),
  };
}
