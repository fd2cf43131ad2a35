import { done, type Outcome } from '@core/protocol/outcome';
import { writeWhole } from '../project/write-whole';
import type { HandlersOf } from './answer';
import type { WindowState } from './window-state';

export function keepHandlers(state: WindowState): HandlersOf<'keep.text' | 'keep.bytes' | 'keep.copy'> {
  return {
    'keep.text': ({ suggested, text }) => keep(state, suggested, text),
    'keep.bytes': ({ suggested, bytes }) => keep(state, suggested, bytes),
    'keep.copy': async ({ text, html }) => {
      await state.desk.copy(text, html);
      return done(null);
    },
  };
}

async function keep(
  state: WindowState,
  suggested: string,
  content: string | Uint8Array,
): Promise<Outcome<{ file: string } | null>> {
  const file = await state.desk.choosePlace('copy', fileName(suggested));
  if (file === null) return done(null);
  const written = writeWhole(file, content);
  return written.ok ? done({ file }) : written;
}

/** A suggestion as the name of a file that every system takes, without a folder. */
function fileName(suggested: string): string {
  // biome-ignore lint/suspicious/noControlCharactersInRegex: they are what no file name may hold
  const name = suggested.replace(/[\u0000-\u001f<>:"/\\|?*]+/g, ' ');
  return (
    name
      .replace(/^[. ]+/, '')
      .slice(0, 150)
      .trimEnd() || 'steelyard'
  );
}
