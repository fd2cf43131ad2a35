import { type Face, SUBSTITUTES } from './faces';
import { breakLines, CHARACTERS, type Measure, printable, widestPiece } from './lines';
import { draws, type ElementFacts, markShift, type Node, type Pdf, type Shift } from './pdf';
import { INK, type Style } from './sheet';

/** A node of the structure tree, by which the page is read aloud. */
export interface Element {
  readonly type: string;
  readonly node: Node;
}

export interface Line {
  readonly text: string;
  readonly style: Style;
  readonly baseline: number;
  readonly x: number;
  /** x is where the line ends, begins or has its middle; it begins there if left out. */
  readonly at?: 'start' | 'middle' | 'end';
}

/** Draws text and rules on the current page of a document, and says what each is. */
export interface Pen {
  readonly pdf: Pdf;
  readonly root: Element;
  readonly widthOf: (text: string, style: Style) => number;
  readonly breakText: (text: string, width: number, style: Style, rest?: number) => string[];
  readonly widestPiece: (text: string, style: Style) => number;
  readonly write: (line: Line) => void;
  readonly rule: (from: number, to: number, y: number, thick: number) => void;
  readonly element: (parent: Element, type: string, facts?: ElementFacts) => Element;
  /** What draw draws belongs to the element. */
  readonly within: (element: Element, draw: () => void) => void;
  /** Lists a place of the current page among the bookmarks, under the last one of a lower level. */
  readonly bookmark: (title: string, level: number, top: number) => void;
  /** What draw draws is no content: repeated heads, page feet, rules. */
  readonly apart: (kind: 'Pagination' | 'Layout', draw: () => void) => void;
}

interface Run {
  /** What is drawn. */
  readonly text: string;
  readonly face: Face;
  /** Of a mark that is drawn on its own. */
  readonly shift: Shift | null;
  /** What the run stands for, where no face has the character and a box is drawn instead. */
  readonly actual: string;
}

const NO_SHIFT: Shift = { right: 0, up: 0 };
const TEXT = { lineBreak: false, baseline: 'alphabetic' } as const;
const BOX = '\u25a1';

const PLAIN_TEXT = /^[\x20-\x7e]*$/;

export function openPen(pdf: Pdf): Pen {
  const root = { type: 'Document', node: pdf.struct('Document') };
  pdf.addStructure(root.node);
  const measuring = measureWith(pdf);
  const marks = marksOf(pdf);
  return {
    pdf,
    root,
    ...measuring,
    write: (line) => write(pdf, line, { widthOf: measuring.widthOf, instead: marks.instead }),
    rule: (from, to, y, thick) => {
      pdf.markContent('Artifact', { type: 'Layout' });
      pdf.lineWidth(thick).strokeColor(INK).moveTo(from, y).lineTo(to, y).stroke();
      pdf.endMarkedContent();
    },
    element: marks.element,
    within: marks.within,
    bookmark: bookmarksOf(pdf),
    apart: (type, draw) => {
      pdf.markContent('Artifact', { type });
      draw();
      pdf.endMarkedContent();
    },
  };
}

interface Marks extends Pick<Pen, 'element' | 'within'> {
  /** What draw draws is read as the text, not as it is drawn. */
  readonly instead: (text: string, draw: () => void) => void;
}

/** Says to which element what is drawn belongs. Marks are never nested: readers lose their place in nested ones. */
function marksOf(pdf: Pdf): Marks {
  let current: Element | undefined;
  const mark = ({ type, node }: Element, facts = {}) => {
    const content = pdf.markStructureContent(type, facts);
    return () => {
      pdf.endMarkedContent();
      node.add(content);
    };
  };
  let end = () => {};
  const element: Marks['element'] = (parent, type, facts = {}) => {
    const node = pdf.struct(type, facts);
    parent.node.add(node);
    return { type, node };
  };
  const within: Marks['within'] = (own, draw) => {
    current = own;
    end = mark(own);
    draw();
    end();
    current = undefined;
  };
  const instead: Marks['instead'] = (actual, draw) => {
    if (current === undefined) return draw();
    end();
    const endSpan = mark(element(current, 'Span', { actual }), { actual });
    draw();
    endSpan();
    end = mark(current);
  };
  return { element, within, instead };
}

function bookmarksOf(pdf: Pdf): Pen['bookmark'] {
  const open = [{ level: 0, node: pdf.outline }];
  return (title, level, top) => {
    while ((open.at(-1)?.level ?? 0) >= level) open.pop();
    // The library takes a place too, though its types do not say so; it counts left from the right edge.
    const place = { expanded: true, top, left: pdf.page.width } as { expanded: boolean };
    open.push({ level, node: (open.at(-1)?.node ?? pdf.outline).addItem(title, place) });
  };
}

/** Measures text in the faces in which it will be drawn. */
export function measureWith(pdf: Pdf): Pick<Pen, 'widthOf' | 'breakText' | 'widestPiece'> {
  const widthOf = (text: string, { face, size }: Style) => {
    let width = 0;
    for (const run of runsOf(printable(text), face)) width += pdf.font(run.face, size).widthOfString(run.text);
    return width;
  };
  const measure =
    (style: Style): Measure =>
    (text) =>
      widthOf(text, style);
  return {
    widthOf,
    breakText: (text, width, style, rest = width) => breakLines(printable(text), width, measure(style), rest),
    widestPiece: (text, style) => widestPiece(printable(text), measure(style)),
  };
}

function write(pdf: Pdf, line: Line, { widthOf, instead }: Pick<Pen, 'widthOf'> & Pick<Marks, 'instead'>): void {
  const { style, baseline, at = 'start' } = line;
  const text = printable(line.text);
  const shift = at === 'start' ? 0 : widthOf(text.trimEnd(), style) * (at === 'end' ? 1 : 0.5);
  let x = line.x - shift;
  pdf.fillColor(style.ink);
  for (const run of runsOf(text, style.face)) {
    pdf.font(run.face, style.size);
    const { right, up } = run.shift ?? NO_SHIFT;
    const draw = () => void pdf.text(run.text, x + right * style.size, baseline - up * style.size, TEXT);
    if (run.actual === '') draw();
    else instead(run.actual, draw);
    x += pdf.widthOfString(run.text);
  }
}

/** Cuts text into stretches that are drawn in one face on one line. */
function runsOf(text: string, face: Face): readonly Run[] {
  if (PLAIN_TEXT.test(text)) return [{ text, face, shift: null, actual: '' }];
  const runs: Run[] = [];
  for (const [character] of text.matchAll(CHARACTERS)) {
    for (const run of drawn(character, face)) {
      const last = runs.at(-1);
      if (last !== undefined && joins(last, run))
        runs[runs.length - 1] = { ...last, text: last.text + run.text, actual: last.actual + run.actual };
      else runs.push(run);
    }
  }
  return runs;
}

function joins(a: Run, b: Run): boolean {
  return a.face === b.face && a.shift === null && b.shift === null && (a.actual === '') === (b.actual === '');
}

/** A character in the wanted face, or in the first substitute that has it and its marks, or as a box that stands for it. */
function drawn(character: string, face: Face): readonly Run[] {
  const codes = Array.from(character, (sign) => sign.codePointAt(0) as number);
  const able = SUBSTITUTES[face].find((candidate) => codes.every((code) => draws(candidate, code)));
  if (able === undefined) return [{ text: BOX, face: 'reserve', shift: null, actual: character }];
  const shift = markShift(able, character);
  if (shift === null) return [{ text: character, face: able, shift, actual: '' }];
  const [base = '', mark = ''] = Array.from(character);
  return [
    { text: base, face: able, shift: null, actual: '' },
    { text: mark, face: able, shift, actual: '' },
  ];
}
