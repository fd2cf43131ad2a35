import type { ReportDocument } from '@core/protocol/document';
import { FACES, type Face, fontPath } from './faces';

export interface PrintOptions {
  /** ISO 8601; the only date in the file. */
  readonly date: string;
  readonly version: string;
}

/** What a structure element may say about itself, beyond what the library's types know. */
export interface ElementFacts {
  readonly alt?: string;
  readonly actual?: string;
  readonly scope?: 'Column' | 'Row';
  readonly bbox?: readonly [number, number, number, number];
}

export type Pdf = PDFKit.PDFDocument;
export type Node = PDFKit.PDFStructureElement;

/** A parsed font, which documents share. */
interface ParsedFont {
  readonly unitsPerEm: number;
  readonly hasGlyphForCodePoint: (code: number) => boolean;
  readonly layout: (text: string) => {
    readonly glyphs: readonly { readonly bbox: Box; readonly advanceWidth: number }[];
    readonly positions: readonly { readonly xOffset: number; readonly yOffset: number }[];
  };
}

interface Box {
  readonly minX: number;
  readonly maxX: number;
  readonly maxY: number;
}

/** How far something is moved, in sizes of the text. */
export interface Shift {
  readonly right: number;
  readonly up: number;
}

/** Null, which keeps the library from loading a face of its own; its types do not know that. */
const NO_FONT = null as unknown as string;

const parsed = new Map<Face, ParsedFont>();

/** The library is read only where a page is printed: it takes longer to load than many a fit. */
async function library(): Promise<PDFKit.PDFDocument> {
  return (await import('pdfkit')).default;
}

/** An empty document with every face registered under its own name, in which text can be measured and drawn. */
export async function openPdf(facts: PDFKit.PDFDocumentOptions = {}): Promise<Pdf> {
  const PdfDocument = await library();
  const pdf = new PdfDocument({
    pdfVersion: '1.7',
    compress: false,
    autoFirstPage: false,
    bufferPages: true,
    margin: 0,
    font: NO_FONT,
    ...facts,
  });
  if (parsed.size === 0) parseFaces(new PdfDocument({ autoFirstPage: false, font: NO_FONT }));
  // The library takes a parsed font in place of a path, though its types do not say so.
  for (const [face, font] of parsed) pdf.registerFont(face, font as unknown as string);
  return pdf;
}

/** A report's document: named, dated and marked as tagged. */
export async function openReport(document: ReportDocument, { date, version }: PrintOptions): Promise<Pdf> {
  const day = new Date(date);
  const { title, subject, author, language } = document;
  const pdf = await openPdf({
    size: document.paper === 'A4' ? 'A4' : 'LETTER',
    tagged: true,
    displayTitle: true,
    lang: language,
    info: {
      Title: title,
      Subject: subject,
      ...(author === null ? {} : { Author: author }),
      Creator: `Steelyard ${version}`,
      CreationDate: day,
      ModDate: day,
    },
  });
  escapeMetadata(pdf);
  return pdf;
}

/** True where the face itself draws the character. */
export function draws(face: Face, code: number): boolean {
  return parsed.get(face)?.hasGlyphForCodePoint(code) ?? false;
}

/**
 * Moves a mark to the middle of its letter and clear above it; null where the font places the mark itself, or there is none.
 *
 * The serif faces place marks over Latin letters alone: the hat of a β would be drawn through its head.
 */
export function markShift(face: Face, character: string): Shift | null {
  const font = parsed.get(face);
  if (font === undefined || !/^\P{M}[\u0300-\u030f\u0311\u0342]$/u.test(character)) return null;
  const { glyphs, positions } = font.layout(character);
  const [base, mark] = glyphs;
  const place = positions[1];
  if (base === undefined || mark === undefined || place === undefined) return null;
  if (place.xOffset !== 0 || place.yOffset !== 0) return null;
  const low = font.layout('x').glyphs[0]?.bbox.maxY ?? 0;
  const right = middle(base.bbox) - base.advanceWidth - middle(mark.bbox);
  return { right: right / font.unitsPerEm, up: Math.max(0, base.bbox.maxY - low) / font.unitsPerEm };
}

function middle({ minX, maxX }: Box): number {
  return (minX + maxX) / 2;
}

export async function bytesOf(pdf: Pdf): Promise<Uint8Array> {
  const chunks: Uint8Array[] = [];
  const whole = new Promise<Uint8Array>((resolve, reject) => {
    pdf.on('data', (chunk: Uint8Array) => chunks.push(chunk));
    pdf.on('end', () => resolve(new Uint8Array(Buffer.concat(chunks))));
    pdf.on('error', reject);
  });
  pdf.end();
  return whole;
}

/** Fonts are read and parsed once a process, in a document that is thrown away. */
function parseFaces(pdf: Pdf): void {
  for (const face of FACES) {
    pdf.font(fontPath(face));
    parsed.set(face, (pdf as unknown as { readonly _font: { readonly font: ParsedFont } })._font.font);
  }
}

/** The library writes title, author and subject into XML as they are: escape them there, and there alone. */
function escapeMetadata(pdf: Pdf): void {
  const end = pdf.endMetadata.bind(pdf);
  pdf.endMetadata = () => {
    for (const key of ['Title', 'Author', 'Subject', 'Creator'] as const) {
      const value = pdf.info[key];
      if (value !== undefined) pdf.info[key] = escapeXml(value);
    }
    end();
  };
}

/** Text as it may stand in XML. */
function escapeXml(text: string): string {
  return text.replace(/[&<>"]/g, (sign) => ({ '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;' })[sign] as string);
}
