import type { Block, Cell } from '../protocol/document';
import type { Result } from '../protocol/result';
import { carriedSentence, isLevelOf } from '../words/beams';
import { coefficientLines, isWithheld } from '../words/coefficients';
import { definitions } from '../words/definitions';
import { fitLines, robustSentence, rSquaredRemark, searchSentence } from '../words/goodness';
import { captions, headings, heads } from '../words/headings';
import { number } from '../words/numbers';
import { logitScaleRemark, logScaleRemark, productRemark, withheldNote } from '../words/remarks';
import { stepOf } from '../words/units';
import { heading, left, list, num, paragraph, right, sentences, table, valued, words } from './blocks';
import { coefficientCells, coefficientHeads, decimalsOf } from './coefficient-rows';
import { inferenceBlocks } from './inference';

/** Up to so many coefficients are told in words too. */
const IN_WORDS = 8;
const MOST_CARRIED = 40;

/** Every coefficient: name, estimate, interval, then error, reference with its freedom, ratio, p; the first also in words with their units. */
export function coefficientBlocks(result: Result): Block[] {
  const { coefficients } = result.fit;
  const withheld = coefficients.some(({ p, reference }) => p !== null && isWithheld(reference));
  return [
    heading(2, headings.coefficients),
    ...table(
      {
        caption: captions.coefficients,
        head: [left(heads.term, 2), ...coefficientHeads(result)],
        rows: coefficients.map((one) => [words(one.term), ...coefficientCells(one)]),
        ...(withheld ? { note: withheldNote } : {}),
      },
      [definitions.coefficient],
    ),
    ...inferenceBlocks(result),
    ...(coefficients.length <= IN_WORDS ? list(coefficientLines(result)) : []),
    ...paragraph(remarks(result)),
    ...carried(result),
  ];
}

function remarks(result: Result): string {
  const { plan, fit } = result;
  const shared = fit.coefficients.some(({ term }) => term !== 'intercept' && stepOf(result, term).more === null);
  return sentences(
    plan.outcomeScale === 'log' ? logScaleRemark : plan.outcomeScale === 'logit' ? logitScaleRemark : null,
    shared ? productRemark : null,
    carriedSentence(result),
  );
}

/** Cells and groups behind each term, where some term rests on fewer groups than there are. */
function carried({ fit, cells }: Result): Block[] {
  const columns = [...new Set(fit.carriedBy.flatMap(({ by }) => by.map(({ column }) => column)))].slice(0, 4);
  const rows = fit.carriedBy.filter(({ term }) => term !== 'intercept');
  if (columns.length === 0 || rows.length === 0 || rows.length > MOST_CARRIED) return [];
  const most = (column: string): number =>
    Math.max(...fit.carriedBy.map(({ by }) => by.find((one) => one.column === column)?.groups ?? 0));
  const fewer = rows.some(
    ({ term, cells: own, by }) =>
      own < cells.length || by.some(({ column, groups }) => groups < most(column) && !isLevelOf(term, column)),
  );
  if (!fewer) return [];
  const groups = ({ term, by }: Result['fit']['carriedBy'][number], column: string): Cell => {
    const found = by.find((one) => one.column === column);
    return found === undefined || isLevelOf(term, column) ? words('') : num(found.groups, { decimals: 0 });
  };
  return table({
    caption: captions.carried,
    head: [
      left(heads.term, 2),
      right(heads.carriedCells),
      ...columns.map((column) => right(heads.carriedGroups(column))),
    ],
    rows: rows.map((one) => [
      words(one.term),
      num(one.cells, { decimals: 0 }),
      ...columns.map((column) => groups(one, column)),
    ]),
  });
}

/** Model-based and robust errors next to each other, with their ratio. */
export function robustBlocks(result: Result): Block[] {
  const { robustBeside, fit } = result;
  if (robustBeside === null) return [];
  const modelPrinted = fit.inference.kind === 'model';
  return [
    heading(3, headings.robust),
    ...paragraph(robustSentence(result)),
    ...(robustBeside.every(({ se }) => se === null)
      ? []
      : table({
          caption: captions.robust,
          head: [
            left(heads.term, 2),
            right(modelPrinted ? heads.modelError : heads.printedError),
            ...(modelPrinted ? [] : [right(heads.modelError)]),
            right(heads.robustError),
            right(heads.robustRatio),
          ],
          rows: robustBeside.map(({ term, se, ratioToModel }) => {
            const own = fit.coefficients.find((one) => one.term === term);
            const decimals = own === undefined ? 4 : decimalsOf(own);
            return [
              words(term),
              num(own?.se ?? null, { decimals }),
              ...(modelPrinted ? [] : [num(se === null || !ratioToModel ? null : se / ratioToModel, { decimals })]),
              num(se, { decimals }),
              valued(ratioToModel, number(ratioToModel, { digits: 3 })),
            ];
          }),
        })),
  ];
}

/** The figures of the fit under their own names, two named R² among them. */
export function fitBlocks(result: Result): Block[] {
  return [
    heading(3, headings.fit),
    ...paragraph(sentences(rSquaredRemark(result.plan), searchSentence(result))),
    ...table({
      caption: captions.fit,
      head: [left(heads.figure, 2), right(heads.value), left(heads.says, 2)],
      rows: fitLines(result).map(({ name, value, text, says }) => [words(name), valued(value, text), words(says)]),
    }),
  ];
}
