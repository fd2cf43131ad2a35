import { asFactor } from '../figures/own-scale';
import type { Block } from '../protocol/document';
import type { Caution, Coefficient, Result } from '../protocol/result';
import { cautionGroupNames, cautionSentence } from '../words/cautions';
import { headings } from '../words/headings';
import { answeredTerms } from '../words/headline';
import { editionLine, noEdition, questionLead, subtitle } from '../words/remarks';
import {
  answerFor,
  factorSentence,
  moreCautions,
  overturnSentences,
  standingSentence,
  uncertaintySentence,
} from '../words/summary';
import { typeset } from '../words/typeset';
import { heading, paragraph, sentences } from './blocks';
import type { EditionFacts } from './edition-facts';

/** Page one carries no more cautions than these. */
const MOST_CAUTIONS = 3;

/** Title, question, the answer in its units with its uncertainty, what would overturn it, at most three cautions. */
export function summaryBlocks(result: Result, edition: EditionFacts | null): Block[] {
  const { plan } = result;
  return [
    heading(1, plan.title === '' ? headings.short : plan.title),
    ...paragraph(subtitle(result), undefined, 'small'),
    ...paragraph(edition === null ? null : editionLine(edition), undefined, 'small'),
    ...(plan.about?.question ? paragraph(questionLead(plan.about.question), undefined, 'lead') : []),
    ...answeredTerms(result).flatMap((term, i) => answerBlocks(result, term, i === 0)),
    ...cautionBlocks(result),
    ...paragraph(edition === null ? noEdition : null, undefined, 'small'),
  ];
}

function answerBlocks(result: Result, term: string, first: boolean): Block[] {
  const own = result.fit.coefficients.find((one) => one.term === term) as Coefficient;
  const leaves = result.plan.report.omit.includes('overturn');
  return [
    ...paragraph(answerFor(result, own), undefined, first ? 'lead' : 'plain'),
    ...paragraph(sentences(factor(result, own), standingSentence(result, own), uncertaintySentence(result, own))),
    ...(leaves ? [] : paragraph(overturnSentences(result, own))),
  ];
}

function factor(result: Result, own: Coefficient): string | null {
  const found = asFactor(result.plan, own);
  return found && factorSentence(result, found);
}

function cautionBlocks(result: Result): Block[] {
  const { cautions, plan } = result;
  const told = answeredTerms(result);
  // What overturns an answer stands beside it already.
  const again = ({ code, facts }: Caution): boolean => code === 'overturned' && told.includes(String(facts['term']));
  const weighty = cautions.filter((one) => one.group !== 'for-record' && !again(one));
  const shown = weighty.slice(0, MOST_CAUTIONS);
  const left = cautions.length - shown.length;
  return [
    ...shown.map(
      (caution): Block => ({
        kind: 'caution',
        group: cautionGroupNames[caution.group],
        text: typeset(cautionSentence(caution, plan)),
      }),
    ),
    ...(plan.report.omit.includes('cautions') || left === 0 ? [] : paragraph(moreCautions(left), undefined, 'small')),
  ];
}
