import { done } from '@core/protocol/outcome';
import type { HandlersOf } from './answer';
import type { WindowState } from './window-state';

export function trailHandlers(state: WindowState): HandlersOf<'trail.read'> {
  return {
    'trail.read': () =>
      state.reading(({ project }) => {
        const verified = project.verifyTrail();
        return done({
          entries: project
            .trail()
            .map(({ number, time, author, action, facts, hash }) => ({ number, time, author, action, facts, hash })),
          whole: verified.ok ? verified.value : null,
          problems: verified.ok ? [] : verified.problems,
        });
      }),
  };
}
