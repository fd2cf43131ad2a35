import { statSync } from 'node:fs';
import { basename, resolve } from 'node:path';
import type { DataPreview } from '@core/protocol/bridge';
import { LARGEST_READ, LARGEST_SENT } from '@core/protocol/limits';
import { done, type Outcome, refuse } from '@core/protocol/outcome';
import { isProject } from '@core/protocol/project-mark';
import { normalRead } from '@core/protocol/read-of';
import type { How } from '../engine/engine';
import { bytesOf } from '../intake/read-files';
import { headOf } from '../project/connection';
import { troubleOf } from '../project/write-whole';
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
      return path === null ? done(null) : state.jobs.during('data.choose', (how) => takeFrom(state, path, how));
    },
    'data.take': ({ name, bytes }) => state.jobs.during('data.take', (how) => takeSent(state, { name, bytes }, how)),
    'data.preview': async ({ name, sha256, read: wanted }) => {
      const read = normalRead(wanted, '/read');
      if (!read.ok) return read;
      return state.jobs.during('data.preview', (how) =>
        state.engine.ask('preview', { name, sha256, read: read.value }, how),
      );
    },
    'data.look': async ({ plan, inputs }) => {
      const read = planIn(plan);
      if (!read.ok) return read;
      const ask = { plan: read.value.text, inputs: atHand(state, inputs) };
      return state.jobs.during('data.look', (how) => state.engine.ask('look', ask, how));
    },
    'data.compare': ({ planId, inputs }) =>
      state.reading((open) => {
        const kept = planOf(open, planId);
        if (!kept.ok) return kept;
        const { plan, inputs: before } = kept.value;
        const given = new Set(inputs.map(({ name }) => name));
        const after = [...before.filter(({ name }) => !given.has(name)), ...atHand(state, inputs)];
        return state.jobs.during('data.compare', (how) => state.engine.ask('compare', { plan, before, after }, how));
      }),
  };
}

/** A file that was chosen, read from its place. One that is a project is offered to the page, to be opened as such. */
async function takeFrom(state: WindowState, path: string, how: How): Promise<Outcome<DataPreview>> {
  const file = basename(path);
  try {
    const stands = statSync(path, { throwIfNoEntry: false });
    if (stands?.isFile() && isProject(headOf(path))) return offerInstead(state, path);
    const fits = checkSize(file, stands?.size ?? 0, LARGEST_READ);
    if (!fits.ok) return fits;
  } catch (error) {
    return { ok: false, problems: [troubleOf(error, file)] };
  }
  const bytes = bytesOf({ path, file, at: '' });
  return bytes.ok ? take(state, { name: file, bytes: bytes.value }, how) : bytes;
}

function offerInstead(state: WindowState, path: string): Outcome<never> {
  state.offered.add(resolve(path));
  return refuse('is-a-project', { file: path, offered: true });
}

/** A file as the page had it, dropped or pasted. */
async function takeSent(state: WindowState, { name: given, bytes }: Sent, how: How): Promise<Outcome<DataPreview>> {
  const name = given.split(/[/\\]/).at(-1) || given;
  if (isProject(bytes)) return refuse('is-a-project', { file: name, offered: false });
  const fits = checkSize(name, bytes.length, LARGEST_SENT);
  return fits.ok ? take(state, { name, bytes }, how) : fits;
}

interface Sent {
  readonly name: string;
  readonly bytes: Uint8Array;
}

async function take(state: WindowState, { name, bytes }: Sent, how: How): Promise<Outcome<DataPreview>> {
  const read = normalRead({});
  if (!read.ok) return read;
  return state.engine.ask('preview', { name, sha256: state.taken.take(bytes), read: read.value }, how);
}
