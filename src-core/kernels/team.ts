import { type Compiled, instanceOf } from './compiled';

/** Kernels that two threads can share: their last two arguments are the range of chunks. */
const SHARED = [
  'weightChunks',
  'reduceChunks',
  'residualChunks',
  'settleChunks',
  'timesChunks',
  'reduceGroups',
] as const;
/** Chunks from which a second thread is worth its telling. */
const WORTH = 8;

const [TOLD, DONE, READY, WHICH, COUNT] = [0, 1, 2, 3, 4];
const ARGUMENTS = 64; // bytes

/** What a second thread needs: the kernels, and a desk on which it is told what to do. */
export interface Invitation {
  readonly kernels: Compiled;
  readonly desk: SharedArrayBuffer;
}

export function inviteTo(kernels: Compiled): Invitation {
  return { kernels, desk: new SharedArrayBuffer(512) };
}

function viewsOf({ desk }: Invitation) {
  return { state: new Int32Array(desk, 0, 8), numbers: new Float64Array(desk, ARGUMENTS) };
}

/** The second thread's whole life: waits to be told, works, says so. Never returns. */
export function helpWith(invitation: Invitation): never {
  const { state, numbers } = viewsOf(invitation);
  const own = instanceOf(invitation.kernels, 1);
  let turn = Atomics.load(state, TOLD);
  Atomics.store(state, READY, 1);
  for (;;) {
    Atomics.wait(state, TOLD, turn);
    if (Atomics.load(state, TOLD) === turn) continue;
    turn = Atomics.load(state, TOLD);
    const name = SHARED[Atomics.load(state, WHICH)] as (typeof SHARED)[number];
    own[name]?.(...numbers.subarray(0, Atomics.load(state, COUNT)));
    Atomics.store(state, DONE, turn);
    Atomics.notify(state, DONE);
  }
}

/** Where a kernel's argument list names its working room, and that room's size in bytes. */
export interface Scratch {
  readonly at: number;
  readonly bytes: number;
}

/**
 * Runs a kernel on a range of chunks, the later half of it on the second thread where that is ready: each chunk's numbers are the same wherever they
 * are made. The second thread works in a room of its own behind the first one's.
 */
export function sharedCall(
  invitation: Invitation,
  call: (name: string, of: readonly number[]) => number | undefined,
): (name: string, of: readonly number[], scratch: Scratch | null) => void {
  const { state, numbers } = viewsOf(invitation);
  return (name, of, scratch) => {
    const [from, to] = of.slice(-2) as [number, number];
    if (to - from < WORTH || Atomics.load(state, READY) === 0) {
      call(name, of);
      return;
    }
    const middle = from + Math.ceil((to - from) / 2);
    const theirs = [...of.slice(0, -2), middle, to];
    if (scratch) theirs[scratch.at] = (theirs[scratch.at] as number) + scratch.bytes;
    numbers.set(theirs);
    Atomics.store(state, WHICH, SHARED.indexOf(name as (typeof SHARED)[number]));
    Atomics.store(state, COUNT, theirs.length);
    const turn = Atomics.add(state, TOLD, 1) + 1;
    Atomics.notify(state, TOLD);
    call(name, [...of.slice(0, -2), from, middle]);
    for (let done = Atomics.load(state, DONE); done !== turn; done = Atomics.load(state, DONE))
      Atomics.wait(state, DONE, done);
  };
}
