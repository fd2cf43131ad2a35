import { Buffer } from 'node:buffer';
import { createHash } from 'node:crypto';
import { unsaidRead } from '@core/protocol/draft';
import type { Outcome } from '@core/protocol/outcome';
import type { Read } from '@core/protocol/plan';
import type { SourceTable } from '@core/protocol/source';
import { readSource } from '@main/intake/read-source';
import { describe, expect, it } from 'vitest';

function reading(content: string | Uint8Array, read: Partial<Read> = {}): Outcome<SourceTable> {
  const bytes = typeof content === 'string' ? Buffer.from(content, 'utf8') : content;
  return readSource({ file: 'cells.csv', bytes, read: { ...unsaidRead, ...read }, at: '/data/file' });
}

function table(content: string | Uint8Array, read: Partial<Read> = {}): SourceTable {
  const outcome = reading(content, read);
  if (!outcome.ok) throw new Error(JSON.stringify(outcome.problems));
  return outcome.value;
}

/** Columns as {name: texts}. */
function texts(content: string | Uint8Array, read: Partial<Read> = {}): Record<string, readonly string[]> {
  return Object.fromEntries(table(content, read).columns.map((column) => [column.name, column.texts]));
}

function fault(content: string | Uint8Array, read: Partial<Read> = {}): unknown {
  const outcome = reading(content, read);
  return outcome.ok ? outcome.value : { ...outcome.problems[0], facts: outcome.problems[0]?.facts };
}

function styles(content: string, read: Partial<Read> = {}): unknown[] {
  return table(content, read).columns.map(({ style }) =>
    'settle' in style ? style : `${style.decimal}${style.group ?? ''}`,
  );
}

/** UTF-16 in either byte order, without a mark unless the text begins with one. */
function utf16(text: string, bigEndian = false): Uint8Array {
  const bytes = Buffer.from(text, 'utf16le');
  return bigEndian ? bytes.swap16() : bytes;
}

describe('bytes', () => {
  const content = 'region,öl\nÄhren,1.5\n';
  const expected = { region: ['Ähren'], öl: ['1.5'] };

  it.each<[string, Uint8Array, string]>([
    ['UTF-8', Buffer.from(content), 'utf-8'],
    ['UTF-8 with two byte order marks', Buffer.from(`\ufeff\ufeff${content}`), 'utf-8'],
    ['UTF-16 with a mark', utf16(`\ufeff${content}`), 'utf-16le'],
    ['UTF-16, big end first, with a mark', utf16(`\ufeff${content}`, true), 'utf-16be'],
    ['UTF-16 by its zeros', utf16(content), 'utf-16le'],
    ['UTF-16, big end first, by its zeros', utf16(content, true), 'utf-16be'],
    ['Windows-1252, since it is no UTF-8', Buffer.from(content, 'latin1'), 'windows-1252'],
  ])('are found to be %s', (_, bytes, encoding) => {
    expect(table(bytes).found.encoding).toBe(encoding);
    expect(texts(bytes)).toEqual(expected);
  });

  it('keep the euro sign and dashes of Windows-1252', () => {
    expect(texts(Uint8Array.of(0x61, 0x0a, 0x80, 0x96, 0x92, 0x0a))).toEqual({ a: ['€–’'] });
  });

  it.each<[string, Uint8Array, Partial<Read>, object]>([
    [
      'a mark that contradicts what is stated',
      utf16('\ufeffa\n1'),
      { encoding: 'utf-8' },
      { encoding: 'utf-8', offset: 0 },
    ],
    [
      'a UTF-8 mark under Windows-1252',
      Buffer.from('\ufeffa\n1'),
      { encoding: 'windows-1252' },
      { encoding: 'windows-1252', offset: 0 },
    ],
    [
      'an odd length in UTF-16',
      Buffer.concat([utf16('a\n1'), Uint8Array.of(49)]),
      { encoding: 'utf-16le' },
      { encoding: 'utf-16le', offset: 6 },
    ],
    ['a lone surrogate', utf16('a\n\ud83d1'), { encoding: 'utf-16le' }, { encoding: 'utf-16le', offset: 4 }],
    ['a trailing surrogate alone, after a mark', utf16('\ufeffa\n\ude00'), {}, { encoding: 'utf-16le', offset: 6 }],
    [
      'a byte that UTF-8 has not',
      Buffer.from('a\n\xe9b', 'latin1'),
      { encoding: 'utf-8' },
      { encoding: 'utf-8', offset: 2 },
    ],
    [
      'an overlong form',
      Uint8Array.of(0x61, 0x0a, 0xc0, 0x80),
      { encoding: 'utf-8' },
      { encoding: 'utf-8', offset: 2 },
    ],
    [
      'a surrogate written in UTF-8',
      Uint8Array.of(0x61, 0xed, 0xa0, 0x80),
      { encoding: 'utf-8' },
      { encoding: 'utf-8', offset: 1 },
    ],
    [
      'a sequence cut off at the end',
      Uint8Array.of(0x61, 0x0a, 0xe2, 0x82),
      { encoding: 'utf-8' },
      { encoding: 'utf-8', offset: 2 },
    ],
    [
      'a byte that neither UTF-8 nor Windows-1252 has',
      Uint8Array.of(0x61, 0x0a, 0x81),
      {},
      { encoding: 'windows-1252', offset: 2 },
    ],
  ])('are refused for %s', (_, bytes, read, facts) => {
    expect(fault(bytes, read)).toEqual({
      code: 'undecodable',
      at: '/data/file',
      facts: { file: 'cells.csv', ...facts },
    });
  });

  it('are refused for U+0000, with its row and column', () => {
    expect(fault('a,ö\n1,2\n3,4\0\n')).toEqual({
      code: 'undecodable',
      at: '/data/file',
      facts: { file: 'cells.csv', encoding: 'utf-8', offset: 12, row: 2, column: 'ö' },
    });
    expect(fault(utf16('\ufeffa,b\n1,\0'))).toMatchObject({ facts: { offset: 14, row: 1, column: 'b' } });
  });

  it('may end in U+001A', () => {
    expect(texts('a,b\n1,2\n\u001a')).toEqual({ a: ['1'], b: ['2'] });
  });

  it('are known by the hash of all of them, marks included', () => {
    const bytes = Buffer.from('\ufeffa\n1\n');
    expect(table(bytes).sha256).toBe(createHash('sha256').update(bytes).digest('hex'));
  });

  it.each([[''], ['\n\r\n'], ['\ufeff'], [' , ,\n,,\n'], ['\u001a']])(
    'without a header are an empty file: %j',
    (content) => {
      expect(fault(content)).toEqual({ code: 'empty-file', at: '/data/file', facts: { file: 'cells.csv' } });
    },
  );

  it('with a header alone have no rows', () => {
    expect(table('a,b\n').rows).toBe(0);
    expect(texts('a,b')).toEqual({ a: [], b: [] });
  });
});

describe('lines and fields', () => {
  it('end in CRLF, LF or CR, mixed too, and keep those inside quotes', () => {
    expect(texts('a,b\r\n1,2\n3,4\r"5\r\n6",7\r\n')).toEqual({ a: ['1', '3', '5\r\n6'], b: ['2', '4', '7'] });
  });

  it('that are blank or delimiters alone are no rows, also before the header', () => {
    const found = table('\n ;\na;b\n\n1;2\n;\n \t\n3;4\n\n');
    expect(found.rows).toBe(2);
    expect(found.columns.map(({ name }) => name)).toEqual(['a', 'b']);
  });

  it('may be quoted, with quotes doubled; a quote inside an unquoted field is text and a backslash escapes nothing', () => {
    expect(texts('a,b\n"say ""so""",5" pipe\n"back\\",x\n')).toEqual({
      a: ['say "so"', 'back\\'],
      b: ['5" pipe', 'x'],
    });
  });

  it('keep formulas, scripts and a quoted blank as plain text', () => {
    expect(texts('a,b\n=cmd|\' /C calc\'!A0,<script>alert(1)</script>\n"","x"\n')).toEqual({
      a: ["=cmd|' /C calc'!A0", ''],
      b: ['<script>alert(1)</script>', 'x'],
    });
  });

  it.each<[string, string, object]>([
    ['a row with too few fields', 'a,b,c\n1,2,3\n4,5\n', { row: 2, found: 2, expected: 3 }],
    ['content beyond the header', 'a,b\n1,2\n\n3,4,,x\n', { row: 2, found: 4, expected: 2 }],
    ['a quote that never closes', 'a,b\n1,2\n"3,4\n5,6\n', { row: 2, found: null, expected: 2 }],
    ['text after a closing quote', 'a,b\n"1"x,2\n', { row: 1, found: null, expected: 2 }],
    ['a quote in the header that never closes', 'a,"b\n1,2\n', { row: 0, found: null, expected: 2 }],
    ['a short row before an open quote', 'a,b,c\n1,2\n"3,4\n', { row: 1, found: 2, expected: 3 }],
    ['a title above the table', 'Rents by district\na,b,c\n1,2,3\n4,5,6\n', { row: 1, found: 3, expected: 1 }],
    ['a note below the table', 'a,b,c\n1,2,3\n4,5,6\nSource: survey\n', { row: 3, found: 1, expected: 3 }],
  ])('are refused for %s', (_, content, facts) => {
    expect(fault(content)).toEqual({ code: 'malformed-row', at: '/data/file', facts: { file: 'cells.csv', ...facts } });
  });

  it('beyond the header are dropped where empty, and so are columns with neither name nor content', () => {
    expect(texts('a,,b,\n1,,2,\n3,,4,,,\n')).toEqual({ a: ['1', '3'], b: ['2', '4'] });
  });

  it('under no name make a column named by its place', () => {
    expect(texts(',a, \nx,1,\ny,2,z\n')).toEqual({ 'column 1': ['x', 'y'], a: ['1', '2'], 'column 3': ['', 'z'] });
  });

  it('may have names like those of every object', () => {
    const found = table('__proto__,constructor,toString\n1,2,3\n').columns;
    expect(found.map(({ name, texts }) => [name, texts[0]])).toEqual([
      ['__proto__', '1'],
      ['constructor', '2'],
      ['toString', '3'],
    ]);
  });

  it('keep both columns of one name, and 200 of them', () => {
    expect(table('a,a\n1,2\n').columns).toHaveLength(2);
    const wide = Array.from({ length: 200 }, (_, c) => `c${c}`);
    expect(table(`${wide.join()}\n${wide.map(() => '1').join()}\n`).columns).toHaveLength(200);
  });

  it('of megabytes in one line are read', () => {
    const long = 'x'.repeat(5_000_000);
    expect(texts(`a,b\n${long},1\n`)['a']?.[0]).toHaveLength(5_000_000);
    expect(fault(`a,b\n"${long}`)).toMatchObject({ code: 'malformed-row' });
  });
});

describe('the delimiter', () => {
  it.each([
    ['comma', 'a,b\n1.5,2\n', ','],
    ['semicolon, over decimal commas', 'a;b\n1,5;2,5\n2,5;3,5\n', ';'],
    ['tab', 'a\tb\n1,5\t2\n', '\t'],
    ['pipe', 'a|b\n1|2\n', '|'],
    ['semicolon, since "5;2" is no number', 'a,b;c\n1,5;2\n', ';'],
    ['comma in spite of a bad row', 'a,b,c\n1,2,3\n4,5\n6,7,8\n', ','],
    ['comma of a single column', 'a\n1\n2\n', ','],
    ['comma, since the semicolons are in quotes', 'a,b\n"x;y",1\n"z;w",2\n', ','],
  ])('is found: %s', (_, content, delimiter) => {
    const outcome = reading(content);
    if (outcome.ok) expect(outcome.value.found.delimiter).toBe(delimiter);
    else expect(outcome.problems[0]).toMatchObject({ code: 'malformed-row', facts: { expected: 3 } });
  });

  it('is named by a line above the header', () => {
    expect(texts('sep=;\r\na;b\r\n1,5;x\r\n')).toEqual({ a: ['1,5'], b: ['x'] });
    expect(texts('"sep=^"\na^b\n1^2\n')).toEqual({ a: ['1'], b: ['2'] });
  });

  it('may be any other character once it is stated', () => {
    expect(texts('a b\n1 2\n', { delimiter: ' ' })).toEqual({ a: ['1'], b: ['2'] });
  });

  it('that is also the group mark is refused', () => {
    expect(fault('a,b\n"1,200",2\n', { group: ',' })).toEqual({
      code: 'not-together',
      at: '/data/read',
      facts: { keys: ['delimiter', 'group'] },
    });
  });

  it('is asked for where two divide the file equally well', () => {
    expect(fault('a,b;c\nx,y;z\n')).toEqual({
      code: 'reads-both-ways',
      at: '/data/file',
      facts: { file: 'cells.csv', row: 1, column: 'a', found: 'x', settle: 'delimiter' },
    });
  });
});

describe('the way numbers are written', () => {
  const nb = '\u00a0';

  it('has decimal points and no group mark in a comma-delimited file, unless told otherwise', () => {
    expect(styles('a,b\n1.204,"1,204"\n')).toEqual(['.', '.']);
    expect(styles('a,b\n"1,5",2\n', { decimal: ',' })).toEqual([',', ',']);
    expect(styles('a,b\n1.204,2\n', { group: '.' })).toEqual([',.', ',.']);
  });

  it.each<[string, string, unknown[]]>([
    ['a decimal comma', 'a;b\n12,5;x\n', [',', ',']],
    ['points as group marks where two stand in one number', 'a;b\n1.204.310;x\n', [',.', ',']],
    ['points as group marks before a decimal comma', 'a;b\n1.204,5;x\n', [',.', ',']],
    ['a space, a no-break space and an apostrophe', `a;b;c\n1 204;1${nb}204;1'204,5\n`, [', ', `,${nb}`, ",'"]],
    ['the mark that a column’s other numbers settle', 'a;b\n1,204;x\n12,5;y\n', [',', ',']],
    ['the mark that another column settles', 'a;b\n1.204;12,5\n1.310;13\n', [',.', ',']],
    ['the other mark that another column settles', 'a;b\n1.204;12.5\n1.310;13\n', ['.', '.']],
    ['decimals below one, since no group begins with 0', 'a;b\n0,204;x\n0,310;y\n', [',', ',']],
    ['points where nothing tells', 'a;b\n12;x\n13;y\n', ['.', '.']],
  ])('is found: %s', (_, content, expected) => {
    expect(styles(content)).toEqual(expected);
  });

  it('is a true tie where nothing in the file settles it', () => {
    expect(styles('a;b\n12;x\n1,204;x\n1,310;y\n')).toEqual([{ row: 2, found: '1,204', settle: 'decimal' }, '.']);
  });

  it('is a tie where two other columns contradict each other', () => {
    expect(styles('a;b;c\n1,204;12.5;3,75\n')[0]).toEqual({ row: 1, found: '1,204', settle: 'decimal' });
  });

  it('is a tie of group marks where two stand in one column equally often', () => {
    expect(styles(`a;b\n1 204;12,5\n1'204;3\n`)[0]).toEqual({ row: 1, found: '1 204', settle: 'group' });
  });

  it('is settled by what is stated', () => {
    expect(styles('a;b\n1,204;x\n', { decimal: ',' })[0]).toBe(',');
    expect(styles('a;b\n1,204;x\n', { decimal: '.' })[0]).toBe('.,');
    expect(styles('a;b\n1,204;x\n', { group: 'none' })[0]).toBe(',');
    expect(styles('a;b\n1,204;x\n', { group: ',' })[0]).toBe('.,');
  });

  it('is judged without statuses, missing codes and footnotes', () => {
    expect(
      styles('a;b\n1.204,5*;1\n-9.5;2\n9.9;3\n', {
        footnotes: ['*'],
        missing: { a: ['-9.5'] },
        statuses: { '9.9': 'not-collected' },
      })[0],
    ).toBe(',.');
  });
});

it('100,000 rows of 10 columns are read in a few seconds', () => {
  const row = (g: number) =>
    Array.from({ length: 10 }, (_, c) => (c === 0 ? `cell ${g}` : `${g % 97},${(g * c) % 1000}`)).join(';');
  const content = `${Array.from({ length: 10 }, (_, c) => `c${c}`).join(';')}\n${Array.from({ length: 100_000 }, (_, g) => row(g)).join('\n')}\n`;
  const bytes = Buffer.from(content);
  const before = performance.now();
  const found = table(bytes);
  expect(found.rows).toBe(100_000);
  expect(found.columns[3]?.style).toEqual({ decimal: ',', group: null });
  expect(performance.now() - before).toBeLessThan(8000);
});
