import type { Machine } from './machine';

/** The few parts of WebAssembly that are used: core is compiled without the types of any host. */
interface CompiledMemory {
  readonly buffer: SharedArrayBuffer;
  grow(pages: number): number;
}
declare const WebAssembly: {
  readonly Memory: new (of: { initial: number; maximum: number; shared: true }) => CompiledMemory;
  readonly Module: new (bytes: Uint8Array) => object;
  readonly Instance: new (
    module: object,
    imports: object,
  ) => { readonly exports: Record<string, (...of: number[]) => number | undefined> };
};

const PAGE = 8192; // doubles
const MOST_PAGES = 65536;
const FIRST_PAGES = 16;
/** Bytes at which each thread's instance keeps its few numbers. */
const OWN_NUMBERS = 1024;

/** Compiled kernels with their memory, as they can be handed to another thread. */
export interface Compiled {
  readonly module: object;
  readonly memory: CompiledMemory;
}

/** Compiles the kernels' bytes; null where the host has no shared WebAssembly memory to give. */
export function compiled(bytes: Uint8Array): Compiled | null {
  try {
    const memory = new WebAssembly.Memory({ initial: FIRST_PAGES, maximum: MOST_PAGES, shared: true });
    return { module: new WebAssembly.Module(bytes), memory };
  } catch {
    return null;
  }
}

/** The exported functions of one instance. */
export type Instance = Record<string, (...of: number[]) => number | undefined>;

/** The exported functions of one thread's instance; thread: 0 for the first. */
export function instanceOf({ module, memory }: Compiled, thread: number): Instance {
  const { exports } = new WebAssembly.Instance(module, { env: { memory, abort: () => {} } });
  exports['settleAt']?.(OWN_NUMBERS * (thread + 1));
  return exports;
}

/** Byte addresses of places. */
const at = (place: number): number => place * 8;

/** Calls one kernel by its name. */
type Call = (name: string, of: readonly number[]) => number | undefined;
/** The same on a range of chunks, the last two arguments; scratch: which argument names the working room, and its bytes. */
type RangedCall = (name: string, of: readonly number[], scratch: { at: number; bytes: number } | null) => void;

/** Doubles of working room of one thread, for blocks of k columns. */
export function scratchOf(k: number): number {
  return Math.max(256, Math.ceil(k / 8) * 8) * (k + 2) + 1024;
}

/** The kernels of one instance; those on a range of chunks by `ranged`. */
export function compiledMachine(kernels: Compiled, call: Call, ranged: RangedCall): Machine {
  return { ...wholeKernels(call), ...rangedKernels(ranged), memory: growing(kernels.memory) };
}

function growing(memory: CompiledMemory): Machine['memory'] {
  let m = new Float64Array(memory.buffer);
  return (doubles) => {
    const pages = Math.ceil(doubles / PAGE) - Math.floor(m.length / PAGE);
    if (pages <= 0) return m;
    try {
      memory.grow(pages);
    } catch {
      return null;
    }
    m = new Float64Array(memory.buffer);
    return m;
  };
}

type Whole = 'joinTriangles' | 'joinPairs' | 'joinSums' | 'factor';

function wholeKernels(call: Call): Pick<Machine, Whole> {
  return {
    joinTriangles: (of, count) => call('joinTriangles', [at(of.triangles), count, of.k, at(of.block)]),
    joinPairs: (pairs, count, each) => call('joinPairs', [at(pairs), count, each]),
    factor: (of) => call('factorLower', [at(of.a), at(of.pitch), of.n, of.least, at(of.diagonal)]) as number,
    joinSums: (sums, count, each) => call('joinSums', [at(sums), count, each]),
  };
}

function rangedKernels(call: RangedCall): Omit<Machine, Whole | 'memory'> {
  const scratch = (place: number, k: number) => ({ at: place, bytes: at(scratchOf(k)) });
  return {
    weights: (of, r) =>
      call('weightChunks', [at(of.v), at(of.roots), at(of.high), at(of.low), r.rows, r.from, r.to], null),
    reduce: (of, r) => {
      const places = [at(of.columns), at(of.stride), of.k, at(of.factors), at(of.triangles), at(of.block)];
      call('reduceChunks', [...places, r.rows, r.from, r.to], scratch(5, of.k));
    },
    groups: (of, r) => {
      const places = [at(of.columns), at(of.stride), of.k, at(of.order), at(of.starts), at(of.triangles), at(of.block)];
      call('reduceGroups', [...places, r.from, r.to], scratch(6, of.k));
    },
    residuals: (of, r) => {
      const columns = [at(of.columns), at(of.lows), at(of.flags), at(of.stride), of.k, at(of.factors), at(of.rests)];
      const results = [at(of.b), at(of.high), at(of.low), at(of.along), at(of.work)];
      call('residualChunks', [...columns, ...results, r.rows, r.from, r.to], scratch(11, of.k));
    },
    settle: (of, r) => {
      const columns = [at(of.columns), at(of.stride), of.k, at(of.roots), at(of.steps), at(of.high), at(of.low)];
      const results = [at(of.whitened), at(of.largest), at(of.work)];
      call('settleChunks', [...columns, ...results, r.rows, r.from, r.to], scratch(9, of.k));
    },
    times: (of, r) => {
      const columns = [at(of.columns), at(of.stride), of.k, at(of.factors), at(of.matrix), of.upTo];
      const results = [at(of.into), at(of.intoStride), at(of.after), at(of.grams), at(of.block)];
      call('timesChunks', [...columns, ...results, r.rows, r.from, r.to], scratch(10, of.k));
    },
  };
}
