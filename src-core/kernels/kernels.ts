import { chunksOf, type Range } from './chunks';
import { type Compiled, compiled, compiledMachine, instanceOf } from './compiled';
import { type Machine, twinMachine } from './machine';
import { type Invitation, inviteTo, sharedCall } from './team';
import { alike, trialOf } from './trial';

/** First place that is given out: below it threads keep their few numbers. */
export const FIRST_PLACE = 1024;

let twin: Machine | null = null;
let machine: Machine | null = null;
let used = 0;
let invitation: Invitation | null = null;

/**
 * Takes the compiled kernels into use, once a thread: from then on they do what the TypeScript twin does otherwise, to the same bits.
 *
 * bytes: a module made of source/. False, and nothing changed, where the host cannot run it or it fails its trial.
 */
export function load(bytes: Uint8Array): boolean {
  const kernels = compiled(bytes);
  const made = kernels && machineOn(kernels);
  if (!made || !alike(trialOf(made), trialOf(twinMachine()))) return false;
  machine = made;
  used++;
  return true;
}

/** Back to the twin. */
export function unload(): void {
  machine = null;
  used++;
}

function machineOn(kernels: Compiled): Machine {
  const own = instanceOf(kernels, 0);
  const call = (name: string, of: readonly number[]) => own[name]?.(...of);
  invitation = inviteTo(kernels);
  return compiledMachine(kernels, call, sharedCall(invitation, call));
}

/** What a second thread is started with, to take half of the work on many cells (`helpWith`); null where the twin works. */
export function invited(): Invitation | null {
  return machine && invitation;
}

/** Kernels with room to work in. */
export interface Room {
  readonly run: Machine;
  readonly m: Float64Array;
  /** Told again by `isStill`: false once another has worked in the memory. */
  readonly turn: number;
}

/**
 * A memory of that many doubles, free from FIRST_PLACE on, its contents undefined: the compiled kernels' where they are loaded and theirs can
 * grow so far, else the twin's. Whoever asks next gets the same places.
 */
export function roomFor(doubles: number): Room {
  used++;
  const m = machine?.memory(doubles);
  if (machine && m) return { run: machine, m, turn: used };
  twin ??= twinMachine();
  return { run: twin, m: twin.memory(doubles) as Float64Array, turn: used };
}

/** True as long as nobody else has asked for room. */
export function isStill(room: Room): boolean {
  return room.turn === used;
}

/** All chunks of so many rows. */
export function allOf(rows: number): Range {
  return { rows, from: 0, to: chunksOf(rows) };
}
