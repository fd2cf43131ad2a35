import { headings } from './headings';
import { quoted } from './numbers';
import { timeText } from './remarks';

/** Places at which a note can stand: the sections of the report, by keys that outlast their wording. */
const places: ReadonlyMap<string, string> = new Map(
  Object.entries(headings).map(([place, text]) => [text as string, place]),
);

/** The place of a heading, as notes name it: page one for the title, which may change; a section that is not known is its own. */
export function placeOf({ title, level }: { readonly title: string; readonly level: number }): string {
  return level === 1 ? 'page-one' : (places.get(title) ?? title);
}

/** The heading of a note's place. */
export function headingOfPlace(place: string): string {
  if (place === 'page-one') return 'Page one';
  return Object.hasOwn(headings, place) ? headings[place as keyof typeof headings] : place;
}

/** What stands in the margin beside a note: "Note". */
export const noteAbout = 'Note';

/** Who wrote a note, and when; the author of notes kept by an older version is not known. */
export function noteBy({ author, time }: { readonly author: string | null; readonly time: string }): string {
  return author === null ? timeText(time) : `${author}, ${timeText(time)}`;
}

/** The paragraphs of a note as it is printed; elsewhere: its section is not in the report, and is named. */
export function noteParagraphs(
  { place, text }: { readonly place: string; readonly text: string },
  { elsewhere }: { readonly elsewhere: boolean },
): readonly string[] {
  const lead = elsewhere ? `Note on ${quoted(headingOfPlace(place))}, which this report leaves out: ` : 'Note: ';
  const lines = text
    .split(/[\r\n\u2028\u2029]+/)
    .map((line) => line.trim())
    .filter((line) => line !== '');
  return lines.map((line, i) => (i === 0 ? `${lead}${line}` : line));
}
