import type { Block } from '../protocol/document';
import { headings } from '../words/headings';
import { noteAbout, noteBy, noteParagraphs, placeOf } from '../words/report-places';
import { paragraph } from './blocks';
import type { NoteFacts } from './edition-facts';

/**
 * The report with what its author adds to it: each note under the heading of its place, with author and time in the margin.
 *
 * A note on page one stands below the lines under its title. One whose section the report does not hold stands at the end of the record, naming
 * that section: what is kept is printed in any case.
 */
export function withNotes(notes: readonly NoteFacts[], blocks: readonly Block[]): Block[] {
  const left = new Map(notes.map((note) => [note.place, note]));
  const noted: Block[] = [];
  let waiting: NoteFacts | undefined;
  for (const block of blocks) {
    if (waiting !== undefined && !(block.kind === 'paragraph' && block.role === 'small')) {
      noted.push(...noteBlocks(waiting));
      waiting = undefined;
    }
    noted.push(block);
    if (block.kind !== 'heading') continue;
    const place = placeOf({ title: block.text, level: block.level });
    const note = left.get(place);
    left.delete(place);
    if (note === undefined) continue;
    if (block.level === 1) waiting = note;
    else noted.push(...noteBlocks(note));
  }
  if (waiting !== undefined) noted.push(...noteBlocks(waiting));
  const end = noted.findIndex((block) => block.kind === 'heading' && block.text === headings.standing);
  const elsewhere = [...left.values()].flatMap((note) => noteBlocks(note, { elsewhere: true }));
  return noted.toSpliced(end < 0 ? noted.length : end, 0, ...elsewhere);
}

function noteBlocks(note: NoteFacts, { elsewhere }: { readonly elsewhere: boolean } = { elsewhere: false }): Block[] {
  const by = [{ about: noteAbout, text: noteBy(note) }];
  return noteParagraphs(note, { elsewhere }).flatMap((text, i) => paragraph(text, i === 0 ? by : undefined));
}
