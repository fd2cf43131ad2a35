import type { Block } from '../protocol/document';
import type { Evidence, Result } from '../protocol/result';
import { freedomText } from '../words/coefficients';
import { definitions } from '../words/definitions';
import { testName } from '../words/evidence-names';
import { captions, headings, heads } from '../words/headings';
import { headlineTerm } from '../words/headline';
import { p } from '../words/numbers';
import {
  batterySentence,
  departureText,
  heterogeneitySentence,
  pairedBy,
  readingNames,
  readingSentences,
} from '../words/readings';
import { evidenceLead, sharedTests, untestedBeyondStated, untestedDependence } from '../words/remarks';
import { testAccount } from '../words/test-accounts';
import { heading, left, list, num, paragraph, right, sentences, table, unbroken, valued, words } from './blocks';

/** Tests that stand in the body in words; the whole battery is in an appendix. */
const told: readonly Evidence['test'][] = [
  'boundary-likelihood-ratio',
  'heterogeneity',
  'size-score-studentised',
  'koenker',
  'dumouchel-duncan',
  'dependence',
  'shapiro-wilk',
];

/** What the data say of the structure, each test that does not reject with the smallest departure that it would have noticed. */
export function evidenceBlocks(result: Result): Block[] {
  const { evidence } = result;
  if (evidence.length === 0) return [];
  const term = headlineTerm(result);
  const spoken = evidence.filter(
    ({ test, p: value, reading }) => told.includes(test) && (value !== null || reading !== 'not-applicable'),
  );
  const more = evidence.filter(({ test, reading }) => !told.includes(test) && reading === 'rejects');
  return [
    heading(2, headings.evidence),
    ...paragraph(sentences(evidenceLead, batterySentence(evidence, result)), [definitions.departure]),
    ...list(
      [...inOrder(spoken), ...more].map((one) =>
        sentences(readingSentences(one, result, term), heterogeneitySentence(one)),
      ),
    ),
    ...paragraph(notTested(evidence)),
  ];
}

function inOrder(evidence: readonly Evidence[]): Evidence[] {
  return told.flatMap((test) => evidence.filter((one) => one.test === test));
}

function notTested(evidence: readonly Evidence[]): string {
  const by = evidence
    .filter(({ test, p: value }) => test === 'dependence' && value !== null)
    .map((one) => pairedBy(one) ?? []);
  if (by.length > 0) return sharedTests(by.map((columns) => `by ${columns.join(' and ')}`));
  const stated = evidence.some(({ test, detail }) => test === 'dependence' && detail['why'] === 'correlated');
  return stated ? untestedBeyondStated : untestedDependence;
}

/** Every test with its figures, reading, smallest departure and how it was made. */
export function evidenceAppendix({ evidence }: Result): Block[] {
  return [
    heading(2, headings.appendixTests),
    ...table({
      caption: captions.tests,
      head: [
        left(heads.test, 2.2),
        right(heads.statistic),
        right(heads.freedom),
        right(heads.p),
        left(heads.reading, 1.2),
        left(heads.departure, 1.6),
        left(heads.auxiliary, 2),
      ],
      rows: evidence.map((one) => [
        valued(one.test, testName(one.test, pairedBy(one))),
        num(one.statistic, { digits: 4 }),
        valued(
          one.freedom1,
          [one.freedom1, one.freedom2]
            .filter((f) => f !== null)
            .map(freedomText)
            .join(', '),
        ),
        valued(one.p, p(one.p)),
        valued(one.reading, readingNames[one.reading]),
        unbroken(one.smallestDeparture?.size ?? null, departureText(one)),
        words(testAccount(one)),
      ]),
    }),
  ];
}
