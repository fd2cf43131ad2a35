import type { ReportDocument } from '@core/protocol/document';
import { printReport } from '@main/print/print-report';
import { describe, expect, it } from 'vitest';
import { hasPoppler, read, type Word, wordsOf } from './poppler';
import {
  awkward,
  cell,
  cloud,
  crowdedMargin,
  everyBlock,
  longTable,
  PROSE,
  patterns,
  reportOf,
  tableOf,
  tenPages,
  wideTable,
  wideTables,
} from './samples';

const options = { date: '2000-01-01T00:00:00Z', version: '0.1.0' };
const print = (document: ReportDocument) => printReport(document, options);
const latin = (bytes: Uint8Array) => Buffer.from(bytes).toString('latin1');

const samples: Readonly<Record<string, ReportDocument>> = {
  'every block': everyBlock,
  'wide tables': wideTables,
  'awkward text': awkward,
  'a crowded margin': crowdedMargin,
  'a long table': longTable(140),
  'ten pages': tenPages,
};

describe('a printed report', () => {
  it('has the same bytes each time, whatever was printed between', async () => {
    const first = await print(everyBlock);
    await print(tenPages);
    const second = await print(everyBlock);
    expect(Buffer.compare(first, second)).toBe(0);
  });

  it('depends on the date in its dates and its identifier alone', async () => {
    const blocks = [{ kind: 'paragraph', role: 'plain', text: 'One line.' }] as const;
    const [early, late] = await Promise.all(
      ['2001-02-03T04:05:06Z', '2031-02-03T04:05:06Z'].map((date) =>
        printReport(reportOf(blocks), { ...options, date }).then(latin),
      ),
    );
    const without = (text = '') =>
      text.replace(/D:\d{14}Z|\d{4}-\d\d-\d\dT[\d:]+Z/g, 'DATE').replace(/\/ID \[[^\]]*\]/, 'ID');
    expect(early).toContain('(D:20010203040506Z)');
    expect(without(early)).toBe(without(late));
    expect(early).not.toBe(late);
  });

  it('is a tagged PDF 1.7 in a stated language, with its title shown and nothing compressed', async () => {
    const text = latin(await print(everyBlock));
    expect(text.startsWith('%PDF-1.7')).toBe(true);
    expect(text).toMatch(/\/Marked true/);
    expect(text).toMatch(/\/Lang \(en\)/);
    expect(text).toMatch(/\/DisplayDocTitle true/);
    expect(text).not.toMatch(/\/Filter/);
    expect(text).toContain('A sample &lt;of&gt; every &amp; block');
    expect(text).toContain('(A sample <of> every & block)');
  });

  it('holds no date but its own and no path', async () => {
    const text = latin(await print(everyBlock));
    expect(new Set(text.match(/D:\d{14}Z?/g))).toEqual(new Set(['D:20000101000000Z']));
    expect(text).not.toContain('resources/fonts');
  });

  it('lists its headings as bookmarks, nested by level', async () => {
    const text = latin(await print(everyBlock));
    expect(text.match(/\/Title \(([^)]*)\)/g)).toHaveLength(4);
    expect(text).toMatch(/\/Title \(What to watch\)/);
  });

  it('of no blocks is one empty page', async () => {
    const bytes = await print(reportOf([]));
    expect(latin(bytes).match(/\/Type \/Page\n/g)).toHaveLength(1);
  });

  it('of ten pages and five figures takes well under a second of the processor once the libraries are loaded', async () => {
    await print(tenPages);
    const start = process.cpuUsage();
    await print(tenPages);
    const { user, system } = process.cpuUsage(start);
    expect((user + system) / 1e6).toBeLessThan(1);
  });
});

describe.skipIf(!hasPoppler)('a printed report, read by another program', () => {
  it('has a structure tree of headings, paragraphs, notes, lists, tables and figures in reading order', async () => {
    const bytes = await print(everyBlock);
    const outline = read(bytes, 'pdfinfo', '-struct').split('\n');
    const top = outline.flatMap((line) => (/^ {2}\S/.test(line) ? [line.trim().replace(/[ :].*/, '')] : []));
    expect(top).toEqual([
      ...['H1', 'P', 'Note', 'H2', 'P', 'Formula', 'Note', 'P', 'H3'],
      ...['P', 'P', 'P', 'Note', 'P', 'P', 'L'],
      ...['Table', 'Note', 'P', 'Div', 'Note', 'P', 'H2', 'Div', 'Div'],
    ]);
    const inner = outline.map((line) => line.trim().replace(/[ :].*/, ''));
    expect(inner.join(' ')).toContain('L LI Lbl LBody LI Lbl LBody LI Lbl LBody Table Caption THead TR TH');
    expect(inner.join(' ')).toContain('Div Figure');
    expect(latin(bytes)).toContain(
      '/Alt (A cloud of points without a trend, and three curves that fall from left to right.)',
    );
    expect(latin(bytes)).toContain('/Alt (beta hat is the weighted least squares estimate)');
  });

  it('keeps words apart where a line ends', async () => {
    const text = read(await print(everyBlock), 'pdfinfo', '-struct-text');
    expect(text).toContain('"design effect 1 The variance of a mean under the design over that');
    expect(text).toContain('"Standard error"');
  });

  it('says a repeated table head and the page feet to the eye alone', async () => {
    const rows = 140;
    const bytes = await print(longTable(rows));
    const heard = read(bytes, 'pdfinfo', '-struct-text');
    const seen = read(bytes, 'pdftotext', '-layout');
    expect(seen.match(/95 % interval/g)).toHaveLength(3);
    expect(heard.match(/95 % interval/g)).toHaveLength(1);
    expect(seen).toContain('page 2 of 3');
    expect(heard).not.toContain('page 2');
    expect(heard.match(/^ {6}TR/gm)).toHaveLength(rows + 1);
    expect(heard.match(/\/Scope \/Row/g)).toHaveLength(rows);
  });

  it('is one table to a reader though its columns are printed in groups', async () => {
    const bytes = await print(reportOf([{ kind: 'table', table: wideTable(6, 26) }]));
    const heard = read(bytes, 'pdfinfo', '-struct');
    expect(heard.match(/^ {2}Table/gm)).toHaveLength(1);
    expect(heard.match(/\/Scope \/Column/g)).toHaveLength(26);
    expect(heard.match(/\/Scope \/Row/g)).toHaveLength(6);
    expect(heard.match(/^ {8}TD/gm)).toHaveLength(6 * 25);
  });

  it('embeds every font it uses', async () => {
    for (const document of [everyBlock, awkward]) {
      const fonts = read(await print(document), 'pdffonts')
        .trim()
        .split('\n')
        .slice(2);
      expect(fonts.length).toBeGreaterThanOrEqual(4);
      for (const font of fonts) expect(font).toMatch(/^[A-Z]{6}\+DejaVu\S+ .* yes yes yes /);
    }
  });

  it('gives back Greek, mathematics and names in many alphabets as they were', async () => {
    const text = read(await print(awkward), 'pdftotext', '-raw');
    for (const part of ['β̂ =', 'Ω⁻¹', 'χ² ≥ 3.84', 'x̄ ± 2', 'ŷ ≈ −0.5', 'τ²', 'Łódź', 'İzmir', 'Ђаково', 'n₁'])
      expect(text.normalize('NFC')).toContain(part.normalize('NFC'));
  });

  it('says a character that no font has, and draws a box for it', async () => {
    const bytes = await print(reportOf([{ kind: 'paragraph', role: 'plain', text: 'From 東京 to Ørsted.' }]));
    expect(read(bytes, 'pdftotext', '-raw')).toMatch(/From\s+東京\s+to Ørsted\./);
    const heard = read(bytes, 'pdfinfo', '-struct-text');
    expect(heard).toMatch(/P \(block\)\s+"From "\s+Span \(inline\)\s+"(?:東京|□□)"\s+" to Ørsted\."/);
    expect(latin(bytes)).toContain(`/ActualText (\xfe\xff\x67\x71\x4e\xac)`);
  });

  it('prints every number of a table whose columns are split', async () => {
    const table = wideTable(6, 26);
    const text = read(await print(reportOf([{ kind: 'table', table }])), 'pdftotext', '-raw').split(/\s+/);
    const count = (of: readonly string[], what: string) => of.filter((word) => word === what).length;
    const numbers = table.rows.flatMap((row) => row.slice(1).map((one) => one.text));
    for (const number of new Set(numbers)) expect(count(text, number)).toBe(count(numbers, number));
  });

  it('has as many pages as it says', async () => {
    const bytes = await print(tenPages);
    const pages = Number(/Pages:\s+(\d+)/.exec(read(bytes, 'pdfinfo'))?.[1]);
    expect(pages).toBeGreaterThanOrEqual(10);
    expect(read(bytes, 'pdftotext', '-layout')).toContain(`page ${pages} of ${pages}`);
  });

  it('starts a new page at a page break, but no empty one', async () => {
    const line = { kind: 'paragraph', role: 'plain', text: 'A line.' } as const;
    const pause = { kind: 'page-break' } as const;
    const words = wordsOf(await print(reportOf([pause, line, pause, pause, line, pause])));
    expect(words.filter((word) => word.text === 'line.').map((word) => word.page)).toEqual([1, 2]);
    expect(Math.max(...words.map((word) => word.page))).toBe(2);
  });

  it.each(Object.entries(samples))('keeps all text of %s on the page, and no word on another', async (_, document) => {
    const words = wordsOf(await print(document));
    const [width, height] = document.paper === 'A4' ? [595.28, 841.89] : [612, 792];
    expect(words.length).toBeGreaterThan(100);
    for (const word of words) {
      expect(word.left).toBeGreaterThan(40);
      expect(word.top).toBeGreaterThan(40);
      expect(word.right).toBeLessThan(width - 40);
      expect(word.bottom).toBeLessThan(height - 25);
    }
    expect(overlaps(words)).toEqual([]);
  });

  it('never ends a page with a heading, nor leaves a line of a paragraph alone', async () => {
    const long = Array.from({ length: 90 }, (_, i) => [
      { kind: 'heading', level: ((i % 3) + 1) as 1 | 2 | 3, text: `Heading${i}` } as const,
      { kind: 'paragraph', role: 'plain', text: PROSE.repeat((i % 3) + 1) } as const,
    ]).flat();
    const words = wordsOf(await print(reportOf(long))).filter((word) => word.bottom < 790);
    const pages = Math.max(...words.map((word) => word.page));
    expect(pages).toBeGreaterThan(8);
    const headings = words.filter((word) => /^Heading\d+$/.test(word.text));
    expect(headings).toHaveLength(90);
    for (const heading of headings) {
      const below = words.filter((word) => word.page === heading.page && word.top > heading.bottom);
      expect(new Set(below.map((word) => word.bottom)).size).toBeGreaterThanOrEqual(2);
    }
    for (let page = 2; page <= pages; page++) {
      const here = words.filter((word) => word.page === page);
      const first = here[0] as Word;
      // A page begins with a heading, or with at least two lines of its paragraph.
      if (/^Heading/.test(first.text)) continue;
      const heading = here.find((word) => /^Heading/.test(word.text));
      const lines = new Set(here.filter((word) => word.bottom < (heading?.top ?? Infinity)).map((word) => word.bottom));
      expect(lines.size).toBeGreaterThanOrEqual(2);
    }
  });

  it('sets a note beside the line that it concerns', async () => {
    const blocks = [1, 2, 3].map(
      (i) =>
        ({
          kind: 'paragraph',
          role: 'plain',
          text: `Body${i} ${PROSE}`,
          margin: [{ about: `About${i}`, text: 'Short.' }],
        }) as const,
    );
    const words = wordsOf(await print(reportOf(blocks)));
    for (const i of [1, 2, 3]) {
      const body = words.find((word) => word.text === `Body${i}`) as Word;
      const about = words.find((word) => word.text === `About${i}`) as Word;
      expect(about.left).toBeGreaterThan(400);
      expect(Math.abs((about.top + about.bottom) / 2 - (body.top + body.bottom) / 2)).toBeLessThan(1.5);
    }
  });

  it('keeps a figure and its caption together, the caption below', async () => {
    const blocks = Array.from({ length: 9 }, (_, i) => [
      { kind: 'paragraph', role: 'plain', text: PROSE.repeat((i % 4) + 1) } as const,
      { kind: 'figure', figure: { ...patterns, caption: `Caption${i}` } } as const,
    ]).flat();
    const words = wordsOf(await print(reportOf(blocks)));
    for (let i = 0; i < 9; i++) {
      const caption = words.find((word) => word.text === `Caption${i}`) as Word;
      const axis = words.filter((word) => word.text === 'respondents' && word.page === caption.page);
      expect(axis.some((word) => caption.top > word.top && caption.top - word.bottom < 25)).toBe(true);
    }
  });

  it('sets numbers flush right under their head', async () => {
    const words = wordsOf(await print(reportOf([{ kind: 'table', table: tableOf(12) }])));
    const right = (text: string) => words.filter((word) => word.text === text).map((word) => word.right);
    const sizes = tableOf(12).rows.flatMap((row) => right(row[1]?.text ?? ''));
    expect(sizes.length).toBeGreaterThanOrEqual(12);
    for (const edge of sizes) expect(Math.abs(edge - (right('Size')[0] as number))).toBeLessThan(0.3);
  });

  it('prints a row longer than a page in full', async () => {
    const name = Array.from({ length: 2500 }, (_, i) => `w${i}`);
    const table = tableOf(1, { rows: [[cell(name.join(' ')), cell(1), cell(2), cell(3), cell('end')]] });
    const words = wordsOf(await print(reportOf([{ kind: 'table', table }])));
    expect(words.filter((word) => /^w\d+$/.test(word.text)).map((word) => word.text)).toEqual(name);
  });

  it('prints 5,000 rows and 5,000 points', async () => {
    const rows = await print(longTable(5000));
    expect(read(rows, 'pdftotext', '-raw').match(/^Cell \w+ of block/gm)).toHaveLength(5000);
    const points = latin(await print(reportOf([{ kind: 'figure', figure: cloud(5000) }])));
    // A circle is four curves.
    expect(points.match(/ c\n/g)?.length).toBeGreaterThanOrEqual(4 * 5000);
  });
});

/** Pairs of words of a page whose boxes meet by more than rounding. */
function overlaps(words: readonly Word[]): string[] {
  const found: string[] = [];
  for (const page of Map.groupBy(words, (word) => word.page).values()) {
    const down = page.toSorted((a, b) => a.top - b.top);
    for (const [i, a] of down.entries())
      for (let j = i + 1; j < down.length && (down[j] as Word).top < a.bottom - 0.5; j++) {
        const b = down[j] as Word;
        if (Math.min(a.right, b.right) - Math.max(a.left, b.left) > 0.5)
          found.push(`page ${a.page}: ${a.text} and ${b.text}`);
      }
  }
  return found;
}
