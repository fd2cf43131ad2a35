import { Worker } from 'node:worker_threads';
import { unsaidRead } from '@core/protocol/draft';
import { openEngine } from '@main/engine/engine';
import { openShelf } from '@main/engine/shelf';
import { sha256Of } from '@main/project/sha256';
import { describe, expect, it, onTestFinished } from 'vitest';
import { codesOf, engineThread, firstProblem, manyCells, smallCells, smallPlan, taken } from './window';

const text = new TextEncoder();

function engineWith(files: readonly string[], start: () => Worker = engineThread) {
  const kept = new Map(files.map((file) => [sha256Of(file), text.encode(file)]));
  const sent: string[] = [];
  let threads = 0;
  const engine = openEngine({
    bytesOf: (sha256) => {
      sent.push(sha256);
      return kept.get(sha256) ?? null;
    },
    start: () => {
      threads++;
      return start();
    },
  });
  onTestFinished(() => engine.close());
  return { engine, sent, threads: () => threads };
}

const named = (file: string) => [{ name: 'cells.csv', sha256: sha256Of(file) }];
const plan = JSON.stringify(smallPlan());
const large = manyCells(8000);
const largePlan = JSON.stringify(smallPlan({ roles: { label: ['cell'], outcome: 'y', size: 'n' } }));

describe('the engine', () => {
  it('is sent a file once, however often it is asked about', async () => {
    const { engine, sent, threads } = engineWith([smallCells]);
    const first = taken(await engine.ask('run', { plan, inputs: named(smallCells) }));
    taken(await engine.ask('look', { plan, inputs: named(smallCells) }));
    expect(taken(await engine.ask('run', { plan, inputs: named(smallCells) }))).toBe(first);
    expect([sent.length, threads()]).toEqual([1, 1]);
  });

  it('starts no thread before it is asked something, and answers `cancelled` once it is closed', async () => {
    const { engine, threads } = engineWith([]);
    expect(threads()).toBe(0);
    await engine.close();
    expect(codesOf(await engine.ask('look', { plan, inputs: [] }))).toEqual(['cancelled']);
    expect(threads()).toBe(0);
  });

  it('closed while it works settles every question', async () => {
    const { engine } = engineWith([large]);
    const asked = [1, 2, 3].map(() => engine.ask('run', { plan: largePlan, inputs: named(large) }));
    await engine.close();
    expect((await Promise.all(asked)).map(codesOf)).toEqual([['cancelled'], ['cancelled'], ['cancelled']]);
  });

  it('a cancelled fit answers at once, and the next question is answered, by a new thread where the old one does not listen', async () => {
    const { engine, threads } = engineWith([large, smallCells]);
    const stop = new AbortController();
    const steps: string[] = [];
    let begun = () => {};
    const working = new Promise<void>((resolve) => {
      begun = resolve;
    });
    const fit = engine.ask(
      'run',
      { plan: largePlan, inputs: named(large) },
      {
        signal: stop.signal,
        progress: (step) => {
          steps.push(step);
          begun();
        },
      },
    );
    await working;
    const asked = performance.now();
    stop.abort();
    expect(codesOf(await fit)).toEqual(['cancelled']);
    expect(performance.now() - asked).toBeLessThan(100);
    const told = steps.length;
    expect(taken(await engine.ask('look', { plan, inputs: named(smallCells) })).used).toBe(5);
    expect([steps.length - told, threads() <= 2]).toEqual([0, true]);
    const gone = await engine.ask('run', { plan, inputs: named(smallCells) }, { signal: AbortSignal.abort() });
    expect(codesOf(gone)).toEqual(['cancelled']);
  });

  it('one cancelled while it waits is never begun', async () => {
    const { engine, sent } = engineWith([large, smallCells]);
    const first = engine.ask('run', { plan: largePlan, inputs: named(large) });
    const stop = new AbortController();
    const second = engine.ask('run', { plan, inputs: named(smallCells) }, { signal: stop.signal });
    stop.abort();
    expect(codesOf(await second)).toEqual(['cancelled']);
    expect((await first).ok).toBe(true);
    expect(sent).toEqual([sha256Of(large)]);
  });

  it('a thread that dies is a fault of ours, one that runs out of memory a table too large; a new one goes on', async () => {
    let next: () => Worker = () => new Worker('setTimeout(() => process.exit(3), 20)', { eval: true });
    const { engine, threads } = engineWith([smallCells], () => next());
    expect(codesOf(await engine.ask('run', { plan, inputs: named(smallCells) }))).toEqual(['fault-of-ours']);
    next = () => new Worker('throw new Error("a slip")', { eval: true });
    expect(firstProblem(await engine.ask('run', { plan, inputs: named(smallCells) }))).toMatchObject({
      code: 'fault-of-ours',
      facts: { message: 'a slip' },
    });
    const hungry = 'const all = []; for (;;) all.push(new Array(1e5).fill(1.5))';
    next = () => new Worker(hungry, { eval: true, resourceLimits: { maxOldGenerationSizeMb: 32 } });
    expect(firstProblem(await engine.ask('run', { plan, inputs: named(smallCells) }))).toMatchObject({
      code: 'memory-full',
      facts: { file: 'cells.csv' },
    });
    next = engineThread;
    expect((await engine.ask('run', { plan, inputs: named(smallCells) })).ok).toBe(true);
    expect(threads()).toBe(4);
  });

  it('prints the same bytes from a result’s text as it was asked for twice', async () => {
    const { engine } = engineWith([smallCells]);
    const result = taken(await engine.ask('run', { plan, inputs: named(smallCells) }));
    const [one, two] = [
      taken(await engine.ask('print', { result, edition: null })),
      taken(await engine.ask('print', { result, edition: null })),
    ];
    expect(Buffer.compare(Buffer.from(one.pdf), Buffer.from(two.pdf))).toBe(0);
  });
});

describe('the shelf', () => {
  it('makes room by those used longest ago, and never for the last', () => {
    const shelf = openShelf(100);
    const files = ['a,b\n1,2\n'.padEnd(60, '\n'), 'c,d\n1,2\n'.padEnd(60, '\n'), 'e\n1\n'.padEnd(300, '\n')] as const;
    const [first, second, third] = files.map((file) => ({ name: 'x.csv', sha256: sha256Of(file), file })) as [
      { name: string; sha256: string; file: string },
      { name: string; sha256: string; file: string },
      { name: string; sha256: string; file: string },
    ];
    for (const { sha256, file } of [first, second]) shelf.put(sha256, text.encode(file));
    taken(shelf.table({ ...first, read: unsaidRead }));
    expect(shelf.tidy()).toEqual([second.sha256]);
    expect(codesOf(shelf.table({ ...second, read: unsaidRead }))).toEqual(['file-not-found']);
    shelf.put(third.sha256, text.encode(third.file));
    expect([shelf.tidy(), shelf.size(third.sha256)]).toEqual([[first.sha256], 300]);
  });

  it('reads a file once for a way of reading it', () => {
    const shelf = openShelf(1000);
    const file = 'a;b\n1,5;2\n';
    const input = { name: 'x.csv', sha256: sha256Of(file) };
    shelf.put(input.sha256, text.encode(file));
    const read = {
      encoding: null,
      delimiter: null,
      decimal: null,
      group: null,
      statuses: {},
      missing: {},
      footnotes: [],
    };
    const table = taken(shelf.table({ ...input, read }));
    expect(taken(shelf.table({ ...input, read }))).toBe(table);
    expect(taken(shelf.table({ ...input, read: { ...read, delimiter: ';' } }))).not.toBe(table);
  });
});
