import { ownScaleAnswer } from '../figures/own-scale';
import type { Block } from '../protocol/document';
import type { Estimated, QuestionResult, Result } from '../protocol/result';
import { referenceText } from '../words/coefficients';
import { definitions } from '../words/definitions';
import { captions, headings, heads } from '../words/headings';
import { interval, levelText } from '../words/numbers';
import { answerSentence, expectRows, questionText, questionTitle } from '../words/questions';
import { heading, left, num, paragraph, right, sentences, table, valued, words } from './blocks';
import { decimalsOf } from './coefficient-rows';

/** Each question with its answer; an expectation with its three intervals, each named. */
export function questionBlocks(result: Result): Block[] {
  const { questions } = result;
  if (questions.length === 0) return [];
  const first = questions.findIndex(({ question }) => question.kind === 'expect');
  return [
    heading(2, headings.questions),
    ...questions.flatMap((one, i) => [
      heading(3, questionTitle(one)),
      ...paragraph(
        sentences(
          one.question.name === null ? null : questionText(one.question),
          answerSentence(result, one),
          ownScaleAnswer(result, one),
        ),
        i === first ? [definitions.threeIntervals] : undefined,
      ),
      ...intervals(result, one),
    ]),
  ];
}

function intervals({ fit }: Result, { question, answer }: QuestionResult): Block[] {
  if (!('fitted' in answer)) return [];
  const names = expectRows(question);
  const rows: [string, Estimated | null][] = [
    [names.fitted, answer.fitted],
    [names.newCellTrue, answer.newCellTrue],
    [names.newCellObserved, answer.newCellObserved],
  ];
  const decimals = decimalsOf(answer.fitted);
  return table({
    caption: captions.question,
    head: [
      left(heads.interval3, 2),
      right(heads.estimate),
      right(heads.interval(levelText(fit.inference.level))),
      right(heads.error),
      right(heads.reference),
    ],
    rows: rows.flatMap(([name, one]) =>
      one === null
        ? []
        : [
            [
              words(name),
              num(one.estimate, { decimals }),
              valued(one.low, interval(one.low, one.high, { decimals })),
              num(one.se, { decimals }),
              valued(one.reference?.freedom ?? null, referenceText(one.reference)),
            ],
          ],
    ),
  });
}
