import { stepsOf } from '../protocol/pointer';

const sections: ReadonlyMap<string, string> = new Map([
  ['data', 'the data'],
  ['roles', 'what the columns are'],
  ['terms', 'the terms'],
  ['variance', 'the variance'],
  ['estimate', 'the method'],
  ['inference', 'the kind of error'],
  ['target', 'the target of the weights'],
  ['beside', 'the structures beside'],
  ['questions', 'the questions'],
  ['units', 'the units'],
  ['matters', 'the differences that matter'],
  ['tests', 'the tests'],
  ['report', 'the report’s settings'],
]);

/** Where in the plan a problem lies, in words; null where there is no place to point at. */
export function placeText(at: string | null): string | null {
  if (at === null || at === '') return null;
  const [first = '', ...rest] = stepsOf(at);
  const section = sections.get(first);
  if (section === undefined) return null;
  const more = rest.map((step) => (/^\d+$/.test(step) ? `no. ${Number(step) + 1}` : step));
  return `In ${section}${more.length > 0 ? `: ${more.join(', ')}` : ''}.`;
}
