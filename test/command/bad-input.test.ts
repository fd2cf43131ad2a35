import { spawn, spawnSync } from 'node:child_process';
import { chmodSync, existsSync, mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { command, messagesOf, scratchFolder, steelyard } from './steelyard';

const { folder, remove } = scratchFolder('bad-input');
const at = (...names: string[]) => join(folder, ...names);

const rows = ['town,n,y,se,x', 'a,10,1.5,0.2,1', 'b,20,2.1,0.3,2', 'c,35,2.9,0.2,3', 'd,8,4.4,0.4,4', 'e,61,5.1,0.2,5'];
const plan = {
  format: 'steelyard-plan/1',
  data: { file: 'cells.csv' },
  roles: { label: ['town'], outcome: 'y', size: 'n', error: 'se' },
  terms: [{ column: 'x' }],
  variance: { parts: [{ kind: 'per-size' }] },
};

/** A plan and its table in a folder of their own; answers the plan's path. */
function job(name: string, changes: { readonly plan?: object; readonly rows?: readonly string[] } = {}): string {
  mkdirSync(at(name), { recursive: true });
  writeFileSync(at(name, 'cells.csv'), (changes.rows ?? rows).join('\n'));
  writeFileSync(at(name, 'plan.json'), JSON.stringify({ ...plan, ...changes.plan }));
  return at(name, 'plan.json');
}

beforeAll(() => void job('good'));
afterAll(remove);

describe('wrong usage', () => {
  it.each([
    ['no verb', [], 'missing-argument'],
    ['an unknown verb', ['rum', 'plan.json'], 'unknown-verb'],
    ['an unknown option', ['run', 'plan.json', '--into', 'x'], 'unknown-option'],
    ['no plan', ['run'], 'missing-argument'],
    ['no folder to write to', ['run', 'plan.json'], 'missing-argument'],
    ['one word too many', ['plan', 'a.json', 'b.json'], 'surplus-argument'],
    ['no author', ['freeze', 'plan.json', '--into', 'x.steelyard'], 'missing-argument'],
  ])('%s: exit status 2, with the name of what is wrong', (_, words, code) => {
    const { status, stderr } = steelyard([...words, '--json'], at('good'));
    expect(status).toBe(2);
    expect(messagesOf(stderr)[0]?.code).toBe(code);
  });

  it('says the nearest real name, and shows the page of verbs', () => {
    const { stderr } = steelyard(['rum', 'plan.json']);
    expect(stderr).toContain('run');
    expect(stderr).toContain('steelyard: regression of cell means');
  });

  it('is not --help, which answers with exit status 0', () => {
    const { status, stdout } = steelyard(['--help']);
    expect(status).toBe(0);
    expect(stdout).toContain('Exit status: 0 done');
  });

  it('is not a verb of a later version, which is exit status 4 by name', () => {
    for (const words of [
      ['compare', 'a:1', 'a:2'],
      ['cells', 't.json', '--out', 'x.csv'],
    ]) {
      const { status, stderr } = steelyard([...words, '--json']);
      expect(status).toBe(4);
      expect(messagesOf(stderr)[0]).toMatchObject({ code: 'not-available', facts: { what: words[0] } });
    }
  });
});

describe('bad input', () => {
  const cases: readonly [string, Parameters<typeof job>[1], string, number][] = [
    ['a plan that is no JSON', {}, 'not-json', 3],
    ['an empty table', { rows: [''] }, 'empty-file', 3],
    ['a header alone', { rows: [rows[0] as string] }, 'no-cells-left', 4],
    ['a missing column', { plan: { terms: [{ column: 'z' }] } }, 'unknown-column', 3],
    ['a word as outcome', { rows: [...rows, 'f,9,high,0.2,6'] }, 'not-a-number', 3],
    [
      'sizes of zero throughout',
      { rows: rows.map((row, g) => (g ? row.replace(/,\d+,/, ',0,') : row)) },
      'no-cells-left',
      4,
    ],
    ['a repeated label', { rows: [...rows, 'a,9,1.5,0.2,6'] }, 'repeated-label', 3],
    ['fewer cells than terms', { rows: rows.slice(0, 2) }, 'fewer-cells-than-terms', 4],
    [
      'dependent columns',
      {
        plan: { terms: [{ column: 'x' }, { column: 'twice' }] },
        rows: rows.map((row, g) => `${row},${g ? 2 * g : 'twice'}`),
      },
      'dependent-columns',
      4,
    ],
    [
      'a category with one level',
      {
        plan: { terms: [{ column: 'kind', as: 'category' }] },
        rows: rows.map((row, g) => `${row},${g ? 'k' : 'kind'}`),
      },
      'one-level',
      4,
    ],
    ['a proportion above 1', { plan: { roles: { ...plan.roles, outcomeUnit: 'share' } } }, 'share-out-of-range', 3],
    ['an unknown key', { plan: { titel: 'x' } }, 'unknown-key', 3],
  ];

  it.each(cases)('%s: exit status and code, nothing written', (name, changes, code, exit) => {
    const file = job(name, changes);
    if (code === 'not-json') writeFileSync(file, '{ "format": steelyard }');
    const { status, stdout, stderr } = steelyard(['run', file, '--out', at(name, 'out'), '--json']);
    const [message] = messagesOf(stderr);
    expect(message?.code).toBe(code);
    expect(message?.text.length).toBeGreaterThan(20);
    expect(status).toBe(exit);
    expect(stdout).toBe('');
    expect(existsSync(at(name, 'out'))).toBe(false);
  });

  it('leaves out a cell whose size or error is zero, negative or missing, with its reason, and goes on', () => {
    const file = job('gaps', { rows: [...rows, 'f,0,6,0.2,6', 'g,-3,6,0.2,6', 'h,,6,0.2,6'] });
    const { status } = steelyard(['run', file, '--out', at('gaps', 'out'), '--only', 'result']);
    expect(status).toBe(0);
    const { data } = JSON.parse(readFileSync(at('gaps', 'out', 'result.json'), 'utf8'));
    expect(data.omitted.map((o: { label: string; reason: { code: string } }) => [o.label, o.reason.code])).toEqual([
      ['f', 'not-above-zero'],
      ['g', 'not-above-zero'],
      ['h', 'blank'],
    ]);
    expect(readdirSync(at('gaps', 'out'))).toEqual(['result.json']);
  });

  it('refuses a plan that is not there, a folder as plan, and bytes that are no text', () => {
    expect(steelyard(['run', at('none.json'), '--out', at('o')]).status).toBe(3);
    expect(steelyard(['run', folder, '--out', at('o')]).status).toBe(3);
    const file = job('bytes');
    writeFileSync(file, Uint8Array.of(0xff, 0xfe, 0, 0xd8, 1, 2));
    const { status, stderr } = steelyard(['plan', file, '--json']);
    expect(status).toBe(3);
    expect(messagesOf(stderr)).toHaveLength(1);
  });

  it('refuses a project that is garbage, foreign or newer, and says so', () => {
    writeFileSync(at('garbage.steelyard'), 'no database at all, only words '.repeat(400));
    const { status, stderr } = steelyard(['check', at('garbage.steelyard'), '--json']);
    expect(status).toBe(3);
    expect(messagesOf(stderr)[0]?.code).toBe('not-a-project');
    expect(steelyard(['check', at('none.steelyard')]).status).toBe(3);
  });
});

describe('a machine that refuses', () => {
  it('has a file where the folder should be: exit status 6', () => {
    writeFileSync(at('taken'), 'mine');
    const { status, stderr } = steelyard(['run', at('good', 'plan.json'), '--out', at('taken'), '--json']);
    expect(status).toBe(6);
    expect(messagesOf(stderr).at(-1)?.code).toBe('in-the-way');
    expect(readFileSync(at('taken'), 'utf8')).toBe('mine');
  });

  it('has a folder where a file should go: exit status 6, and the folder stays', () => {
    mkdirSync(at('out-with-folder', 'result.json'), { recursive: true });
    const { status } = steelyard(['run', at('good', 'plan.json'), '--out', at('out-with-folder')]);
    expect(status).toBe(6);
    expect(readdirSync(at('out-with-folder'))).toEqual(['result.json']);
  });

  it('has a full disk: exit status 6 and nothing half-written', () => {
    // A small file system of its own where that may be made, else the device that is always full stands in for it.
    const full = at('full');
    mkdirSync(full);
    const made = spawnSync('mount', ['-t', 'tmpfs', '-o', 'size=16k', 'tmpfs', full]).status === 0;
    try {
      const out = made ? join(full, 'out') : '/dev/full/out';
      const { status, stderr } = steelyard(['run', at('good', 'plan.json'), '--out', out, '--json']);
      expect(status).toBe(6);
      if (made) {
        expect(messagesOf(stderr).at(-1)?.code).toBe('disk-full');
        expect(readdirSync(out).filter((name) => name.endsWith('.part'))).toEqual([]);
      }
    } finally {
      if (made) spawnSync('umount', [full]);
    }
  });

  it('has a read-only folder: exit status 6', () => {
    const locked = at('locked');
    mkdirSync(locked);
    // Permission bits do not bind the superuser: a read-only mount does.
    const bound = spawnSync('mount', ['-t', 'tmpfs', '-o', 'ro,size=64k', 'tmpfs', locked]).status === 0;
    if (!bound) chmodSync(locked, 0o555);
    try {
      expect(steelyard(['run', at('good', 'plan.json'), '--out', join(locked, 'out')]).status).toBe(6);
    } finally {
      if (bound) spawnSync('umount', [locked]);
      else chmodSync(locked, 0o755);
    }
  });
});

describe('Ctrl-C in the middle', () => {
  it('ends with exit status 130 and leaves nothing', async () => {
    const many = Array.from(
      { length: 200_000 },
      (_, g) => `t${g},${5 + (g % 900)},${Math.sin(g) + Math.cos(7 * g) / Math.sqrt(5 + (g % 900))},0.2,${g % 17}`,
    );
    const file = job('long', {
      rows: [rows[0] as string, ...many],
      plan: { variance: { parts: [{ kind: 'per-size' }, { kind: 'between' }] } },
    });
    const child = spawn(process.execPath, [command, 'run', file, '--out', at('long', 'out')], { stdio: 'ignore' });
    await new Promise((turn) => setTimeout(turn, 900));
    child.kill('SIGINT');
    const status = await new Promise((ended) => child.once('exit', ended));
    expect(status).toBe(130);
    expect(existsSync(at('long', 'out'))).toBe(false);
  });
});
