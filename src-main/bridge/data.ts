import { statSync } from 'node:fs';
import { basename } from 'node:path';
import type { DataPreview } from '@core/protocol/bridge';
import { done, type Outcome } from '@core/protocol/outcome';
import { normalRead } from '@core/protocol/read-of';
import { bytesOf } from '../intake/read-files';
import type { HandlersOf } from './answer';
import { planOf } from './open-project';
import { atHand, planIn } from './plan-in';
import { checkSize } from './taken-files';
import type { WindowState } from './window-state';

type Questions = 'data.choose' | 'data.take' | 'data.preview' | 'data.look' | 'data.compare';

export function dataHandlers(state: WindowState): HandlersOf<Questions> {
  return {
    'data.choose': async () => {
      const path = await state.desk.chooseFile('data');
      return path === null ? done(null) : takeFrom(state, path);
    },
    'data.take': ({ name, bytes }) => take(state, name, bytes),
    'data.preview': async ({ name, sha256, read: wanted }) => {
      const read = normalRead(wanted, '/read');
      return read.ok ? state.engine.ask('preview', { name, sha256, read: read.value }) : read;
    },
    'data.look': async ({ plan, inputs }) => {
      const read = planIn(plan);
      return read.ok ? state.engine.ask('look', { plan: read.value.text, inputs: atHand(state, inputs) }) : read;
    },
    'data.compare': ({ planId, inputs }) =>
      state.reading((open) => {
        const kept = planOf(open, planId);
        if (!kept.ok) return kept;
        const { plan, inputs: before } = kept.value;
        const given = new Set(inputs.map(({ name }) => name));
        const after = [...before.filter(({ name }) => !given.has(name)), ...atHand(state, inputs)];
        return state.engine.ask('compare', { plan, before, after });
      }),
  };
}

async function takeFrom(state: WindowState, path: string): Promise<Outcome<DataPreview>> {
  const name = basename(path);
  const fits = checkSize(name, statSync(path, { throwIfNoEntry: false })?.size ?? 0);
  if (!fits.ok) return fits;
  const bytes = bytesOf({ path, file: name, at: '' });
  return bytes.ok ? take(state, name, bytes.value) : bytes;
}

async function take(state: WindowState, given: string, bytes: Uint8Array): Promise<Outcome<DataPreview>> {
  const name = given.split(/[/\\]/).at(-1) || given;
  const taken = state.taken.take(name, bytes);
  if (!taken.ok) return taken;
  const read = normalRead({});
  return read.ok ? state.engine.ask('preview', { name, sha256: taken.value, read: read.value }) : read;
}
