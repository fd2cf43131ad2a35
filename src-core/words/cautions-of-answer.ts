import type { CautionCode, RejectingTest } from '../protocol/cautions';
import { type CautionSentences, shiftSentence } from './caution-parts';
import { changePhrase, crossingPhrase } from './changes';
import { freedomText } from './coefficients';
import { testName } from './evidence-names';
import { count, decimalsBy, list, listSome, number, numberWord, percent, pIs, plural, rangeText } from './numbers';
import { ruleName } from './rules';
import { checkFigure, checkSentence } from './self-checks';
import { parameterSign } from './structures';
import { cellName, inOutcomeUnit } from './units';

type AnswerCode = Extract<
  CautionCode,
  | 'self-check-failed'
  | 'few-digits'
  | 'overturned'
  | 'scale-contradicted'
  | 'structure-rejected'
  | 'dependence-found'
  | 'weighting-changes-answer'
  | 'weights-concentrated'
  | 'variance-at-boundary'
  | 'robust-differs'
  | 'bounds-undo'
>;

/** What changes the answer. */
export const answerCautions: CautionSentences<AnswerCode> = {
  'self-check-failed': ({ check, figure }) =>
    `A check of the program on these data failed. ${checkSentence(check)} Found: ${checkFigure({ check, figure, passed: false })}. Do not use the figures before the cause is found.`,
  'few-digits': ({ digits, condition }) =>
    `Only ${number(digits, { decimals: 1 })} digits of the coefficients are certain (condition ${number(condition, { digits: 2 })}). Columns nearly depend on each other: centre or rescale them, or drop one.`,
  overturned: ({ term, kind, what, estimate, low, high, crosses, crossing, tried, shift }, plan) => {
    const decimals = decimalsBy(low === null || high === null ? null : (high - low) / 4, estimate);
    const shown = number(estimate, { decimals });
    const range = low === null && high === null ? '' : `, interval ${rangeText(low, high, decimals)}`;
    const errors =
      shift?.inErrors == null ? '' : `, a shift of ${number(shift.inErrors, { digits: 2 })} standard errors`;
    const start = `${numberWord(crossing)} of`;
    return `${start} ${plural(tried, 'change')} tried ${crossing === 1 ? 'takes' : 'take'} a coefficient or its interval across zero or the smallest difference that matters. The largest: ${changePhrase({ kind, what }, plan)} gives ${plan === null ? shown : inOutcomeUnit(shown, plan)} for ${term}${range}${errors}, across ${crossingPhrase(crosses)}. Report the finding together with this change, or not as settled.`;
  },
  'scale-contradicted': ({ statistic, freedom, p, phi }) =>
    `The given errors do not account for the scatter: chi-square ${number(statistic)} on ${freedomText(freedom)}, ${pIs(p)}. Were the scale free it would be ${number(phi, { digits: 3 })}, and every standard error ${number(Math.sqrt(phi), { digits: 3 })} times what is printed. Set the scale free, or add a between part.`,
  'structure-rejected': ({ tests, shift }, plan) =>
    `${tests.length === 1 ? 'A test rejects' : `${numberWord(tests.length)} tests reject`} the variance structure used: ${list(tests.map(testPhrase))}. Standard errors may be wrong.${shiftSentence(shift, plan, 'Under the structures beside it, the coefficient of')} Compare the structures, use robust errors, or state another structure.`,
  'dependence-found': ({ tests }) =>
    `Cells are taken as independent, and residuals go together: ${list(tests.map(testPhrase))}. Standard errors are likely too small. State a correlation or a shared part, or cluster the errors.`,
  'weighting-changes-answer': ({ statistic, freedom1, freedom2, p, shift }, plan) =>
    `Weighted and unweighted fits differ by more than chance (F = ${number(statistic, { digits: 3 })} on ${freedomText(freedom1)} and ${freedomText(freedom2)}, ${pIs(p)}). This is an alarm about the model, such as missing terms or curvature, and no advice to weight.${shiftSentence(shift, plan, 'Unweighted, the coefficient of')} Look for terms that go with size.`,
  'weights-concentrated': ({ effectiveCells, cells, heaviest, heaviestShare, shift }, plan) =>
    `The weights rest on few cells: ${count(cells)} cells weigh like ${number(effectiveCells, { digits: 3 })} equal ones, and ${plan === null ? heaviest : cellName(heaviest, plan)} alone has ${percent(heaviestShare)} of the weight.${shiftSentence(shift, plan, 'Without the cells that carry half its pull, the coefficient of')} Check these cells first.`,
  'variance-at-boundary': ({ name, rules, shift }, plan) =>
    `${parameterSign(name)} is estimated at its boundary, 0: ${name === 'tau2' ? 'the weights are those of sampling alone' : 'the part adds nothing'}, and its standard error says nothing.${otherRules(rules)}${shiftSentence(shift, plan, 'There the coefficient of')} Zero is an estimate, and not a finding that cells do not differ.`,
  'robust-differs': ({ terms }) =>
    `Robust and model-based standard errors differ: ${listSome(
      terms.map(({ term, ratio }) => `${term} ${number(ratio, { digits: 2 })} times`),
      4,
    )} the model-based one. Either the structure is wrong or a few cells govern the robust error. Report both.`,
  'bounds-undo': ({ terms, cells, shift }, plan) => {
    const named = terms.map(({ term, low, high }) => `${term} (${openRange(low, high)})`);
    const turns = terms.filter(({ sign }) => !sign).map(({ term }) => term);
    const signs = turns.length === 0 ? 'Signs hold throughout.' : `The sign of ${listSome(turns, 4)} can turn.`;
    return `Values of ${plural(cells, 'cell')} are known to within limits only, and over all that they can be ${listSome(named, 4)} ${terms.length === 1 ? 'is' : 'are'} not told from zero. ${signs}${shiftSentence(shift, plan, 'At its furthest, the coefficient of')} Report the range, or obtain the values.`;
  },
};

/** A range that may be open at either end. */
function openRange(low: number | null, high: number | null): string {
  if (low === null && high === null) return 'without bounds';
  if (low === null) return `${number(high, { digits: 3 })} or less`;
  return high === null
    ? `${number(low, { digits: 3 })} or more`
    : `${number(low, { digits: 3 })} to ${number(high, { digits: 3 })}`;
}

function testPhrase({ test, statistic, freedom1, freedom2, p, by }: RejectingTest): string {
  const freedom = [freedom1, freedom2].filter((one) => one !== null).map(freedomText);
  const on = freedom.length === 0 ? '' : ` on ${freedom.join(' and ')}`;
  return `${testName(test, by)} (${number(statistic, { digits: 3 })}${on}, ${pIs(p)})`;
}

function otherRules(rules: readonly { rule: string; tau2: number }[]): string {
  if (rules.length === 0) return '';
  return ` Other rules give ${list(rules.map(({ rule, tau2 }) => `${number(tau2, { digits: 3 })} (${ruleName(rule)})`))}.`;
}
