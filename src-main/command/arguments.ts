import { nearestName } from '@core/protocol/nearest';
import { done, type Outcome, refuse } from '@core/protocol/outcome';

export type Call =
  | { readonly verb: 'help' | 'version' }
  | { readonly verb: 'run'; readonly plan: string; readonly out: string; readonly only: 'result' | null }
  | { readonly verb: 'plan'; readonly plan: string }
  | { readonly verb: 'freeze'; readonly plan: string; readonly into: string; readonly author: string }
  | { readonly verb: 'check'; readonly project: string }
  | { readonly verb: 'schema'; readonly name: string }
  | { readonly verb: 'unavailable'; readonly what: string };

interface Shape {
  readonly places: readonly string[];
  readonly options: readonly string[];
}

const shapes: Readonly<Record<string, Shape>> = {
  run: { places: ['PLAN.json'], options: ['out', 'only'] },
  plan: { places: ['PLAN.json'], options: [] },
  freeze: { places: ['PLAN.json'], options: ['into', 'author'] },
  check: { places: ['PROJECT'], options: [] },
  compare: { places: ['PROJECT:1', 'PROJECT:2'], options: [] },
  cells: { places: ['TABULATION.json'], options: ['out', 'sql', 'sums'] },
  schema: { places: ['NAME'], options: [] },
};

interface Words {
  readonly places: string[];
  readonly options: Map<string, string>;
}

function split(verb: string, shape: Shape, given: readonly string[]): Outcome<Words> {
  const words: Words = { places: [], options: new Map() };
  for (let at = 0; at < given.length; at++) {
    const word = given[at] as string;
    if (!word.startsWith('--')) {
      if (words.places.length === shape.places.length) return refuse('surplus-argument', { verb, found: word });
      words.places.push(word);
      continue;
    }
    const [name = '', inline] = word.slice(2).split(/=(.*)/s);
    if (!shape.options.includes(name))
      return refuse('unknown-option', { found: word, nearest: asOption(nearestName(name, shape.options)) });
    const value = inline ?? given[++at];
    if (value === undefined || value === '') return refuse('missing-argument', { verb, argument: `--${name}` });
    words.options.set(name, value);
  }
  const missing = shape.places[words.places.length];
  return missing === undefined ? done(words) : refuse('missing-argument', { verb, argument: missing });
}

function asOption(name: string | null): string | null {
  return name === null ? null : `--${name}`;
}

/**
 * The words after `steelyard`, `--json` taken out, as a call.
 *
 * Refuses an unknown verb or option (with the nearest real one), an argument that is missing and one that is too many; verbs of the
 * contract that this version lacks come back as `unavailable`.
 */
export function readCall(given: readonly string[]): Outcome<Call> {
  if (given.includes('--help')) return done({ verb: 'help' });
  if (given.includes('--version')) return done({ verb: 'version' });
  const [verb, ...rest] = given;
  if (verb === undefined) return refuse('missing-argument', { verb: 'steelyard', argument: 'VERB' });
  if (!Object.hasOwn(shapes, verb))
    return refuse('unknown-verb', { found: verb, nearest: nearestName(verb, Object.keys(shapes)) });
  const words = split(verb, shapes[verb] as Shape, rest);
  return words.ok ? callOf(verb, words.value) : words;
}

function callOf(verb: string, { places, options }: Words): Outcome<Call> {
  const place = places[0] as string;
  const needed = (name: string) => refuse('missing-argument', { verb, argument: `--${name}` });
  switch (verb) {
    case 'run': {
      const out = options.get('out');
      const only = options.get('only') ?? null;
      if (out === undefined) return needed('out');
      if (only !== null && only !== 'result') return refuse('unknown-kind', { found: only, nearest: 'result' });
      return done({ verb, plan: place, out, only });
    }
    case 'freeze': {
      const into = options.get('into');
      const author = options.get('author');
      if (into === undefined) return needed('into');
      if (author === undefined || author.trim() === '') return needed('author');
      return done({ verb, plan: place, into, author });
    }
    case 'plan':
      return done({ verb, plan: place });
    case 'check':
      return done({ verb, project: place });
    case 'schema':
      return done({ verb, name: place });
    default:
      return done({ verb: 'unavailable', what: verb });
  }
}
