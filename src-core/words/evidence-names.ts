import type { EvidenceTest } from '../protocol/result';
import { list } from './numbers';

interface TestWords {
  readonly name: string;
  /** What the test asks of the data. */
  readonly asks: string;
  readonly source: string;
}

/** Every test of the structure: its name, its question, where it was published. */
export const testWords: { readonly [T in EvidenceTest]: TestWords } = {
  'breusch-pagan': {
    name: 'Breusch-Pagan score test',
    asks: 'Do squared whitened residuals go with the columns? Assumes normal errors.',
    source: 'Breusch & Pagan 1979',
  },
  koenker: {
    name: 'Koenker’s score test',
    asks: 'Do squared whitened residuals go with the columns? Does without normal errors.',
    source: 'Koenker 1981',
  },
  'size-score': {
    name: 'Score test on log size',
    asks: 'Is some of the variance still left to follow size? Assumes normal errors.',
    source: 'Cook & Weisberg 1983',
  },
  'size-score-studentised': {
    name: 'Studentised score test on log size',
    asks: 'Is some of the variance still left to follow size? Does without normal errors.',
    source: 'Cook & Weisberg 1983; Koenker 1981',
  },
  'size-slope': {
    name: 'Size slope',
    asks: 'Do squared residuals split into a part that falls with size and one that does not?',
    source: 'Dickens 1990',
  },
  white: {
    name: 'White’s test',
    asks: 'Do squared whitened residuals go with the columns, their squares and products?',
    source: 'White 1980',
  },
  'goldfeld-quandt': {
    name: 'Goldfeld-Quandt test by size',
    asks: 'Do the smallest and the largest cells have the same whitened variance?',
    source: 'Goldfeld & Quandt 1965',
  },
  'brown-forsythe': {
    name: 'Brown-Forsythe test by quarter of size',
    asks: 'Do whitened residuals spread alike in the four quarters of size?',
    source: 'Brown & Forsythe 1974',
  },
  'dumouchel-duncan': {
    name: 'DuMouchel-Duncan test',
    asks: 'Do weighted and unweighted fits agree? If not, terms may be missing.',
    source: 'DuMouchel & Duncan 1983',
  },
  dependence: {
    name: 'Moran’s I',
    asks: 'Do residuals of cells that belong together go together?',
    source: 'Moran 1950; Cliff & Ord 1981',
  },
  heterogeneity: {
    name: 'Cochran’s Q',
    asks: 'Do cells differ beyond their given errors?',
    source: 'Cochran 1954; Higgins & Thompson 2002',
  },
  'boundary-likelihood-ratio': {
    name: 'Likelihood ratio at the boundary',
    asks: 'Is the variance part above zero?',
    source: 'Self & Liang 1987',
  },
  'shapiro-wilk': {
    name: 'Shapiro-Wilk test',
    asks: 'Are whitened residuals normal?',
    source: 'Shapiro & Wilk 1965; Royston 1995',
  },
};

/** A test's name; with the columns that pair cells for dependence: "Moran’s I by parish". */
export function testName(test: string, by: readonly string[] | null = null): string {
  const known = (testWords as { readonly [test: string]: TestWords | undefined })[test];
  const name = known?.name ?? test;
  return by === null || by.length === 0 ? name : `${name} by ${list(by)}`;
}

/** A test's name as a sentence begins with it: "The Shapiro-Wilk test", "Moran’s I by parish". */
export function testAtStart(test: string, by: readonly string[] | null = null): string {
  const name = testName(test, by);
  if (name.includes('’s ')) return name;
  const proper = /^[A-Z]\p{L}+-[A-Z]/u.test(name);
  return `The ${proper ? name : `${name.charAt(0).toLowerCase()}${name.slice(1)}`}`;
}
