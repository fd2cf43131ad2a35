import type { StartLook } from '@core/protocol/bridge';
import { done, type Outcome } from '@core/protocol/outcome';
import type { HandlersOf } from './answer';
import type { WindowState } from './window-state';

export function startHandlers(state: WindowState): HandlersOf<'start.look' | 'start.forget'> {
  return {
    'start.look': () => startLook(state),
    'start.forget': () => {
      state.recent.forget();
      return startLook(state);
    },
  };
}

async function startLook(state: WindowState): Promise<Outcome<StartLook>> {
  // An open project that cannot be read any more is told by every question about it; the start screen stands all the same.
  const project = await state.look();
  return done({ version: state.desk.version, recent: state.recent.list, project: project.ok ? project.value : null });
}
