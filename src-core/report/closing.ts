import type { Block } from '../protocol/document';
import type { Caution, Result } from '../protocol/result';
import { cautionGroupNames, cautionSentence, standingCautions } from '../words/cautions';
import { digitsSentence } from '../words/goodness';
import { captions, headings, heads } from '../words/headings';
import { methodsOf } from '../words/methods';
import {
  editionLine,
  headText,
  leftOutByPlan,
  noDecisions,
  signBlank,
  signRoles,
  testsCounted,
  timeText,
} from '../words/remarks';
import { checkFigure, checkSentence, passedText } from '../words/self-checks';
import { typeset } from '../words/typeset';
import { heading, left, paragraph, right, sentences, table, valued, words } from './blocks';
import type { EditionFacts } from './edition-facts';

/** Every caution in its group. */
export function cautionBlocks({ cautions, plan }: Result, tried: number): Block[] {
  if (cautions.length === 0) return [];
  return [
    heading(2, headings.cautions),
    ...cautions.map(
      (one): Block => ({
        kind: 'caution',
        group: cautionGroupNames[one.group],
        text: typeset(cautionSentence(counted(one, tried), plan)),
      }),
    ),
  ];
}

/** The trail of a project knows of more structures than the result holds. */
function counted(caution: Caution, tried: number): Caution {
  return caution.code === 'structures-tried' ? { ...caution, facts: { ...caution.facts, tried } } : caution;
}

/** What was done and who published it. */
export function methodBlocks(result: Result): Block[] {
  return [
    heading(2, headings.methods),
    ...methodsOf(result).flatMap(({ title, text, sources }) =>
      paragraph(`${title}. ${text}`, sources === '' ? undefined : [{ about: title, text: sources }]),
    ),
  ];
}

/** What the program checked of its own figures, on these data. */
export function checkBlocks(result: Result): Block[] {
  const { selfChecks } = result;
  const passed = selfChecks.filter((one) => one.passed).length;
  return [
    heading(2, headings.checks),
    ...paragraph(
      sentences(
        selfChecks.length === 0 ? null : testsCounted({ passed, all: selfChecks.length }),
        digitsSentence(result),
      ),
    ),
    ...table({
      caption: captions.checks,
      head: [left(heads.check, 4), left(heads.passed), right(heads.result)],
      rows: selfChecks.map((one) => [
        valued(one.check, checkSentence(one.check)),
        valued(one.passed, passedText(one.passed)),
        valued(one.figure, checkFigure(one)),
      ]),
    }),
  ];
}

/** Who decided what and when, and where to sign. */
export function recordBlocks({ plan }: Result, edition: EditionFacts | null): Block[] {
  const decisions = edition?.decisions ?? [];
  return [
    heading(2, headings.record),
    ...(edition === null ? [] : paragraph(sentences(editionLine(edition), headText(edition.head)))),
    ...(decisions.length === 0
      ? paragraph(edition === null ? null : noDecisions)
      : table({
          caption: captions.decisions,
          head: [left(heads.decision, 4), left(heads.author), left(heads.time)],
          rows: decisions.map(({ text, author, time }) => [words(text), words(author), valued(time, timeText(time))]),
        })),
    ...table({
      caption: captions.signOff,
      head: [left(heads.signRole), left(heads.name, 2), left(heads.signature, 2), left(heads.date)],
      rows: signRoles.map((role) => [words(role), words(signBlank), words(signBlank), words(signBlank)]),
    }),
    ...(plan.report.omit.length === 0 ? [] : paragraph(leftOutByPlan(plan.report.omit), undefined, 'small')),
  ];
}

/** The two remarks that no data can lift. */
export function standingBlocks(): Block[] {
  return [heading(2, headings.standing), ...standingCautions.flatMap((text) => paragraph(text))];
}
