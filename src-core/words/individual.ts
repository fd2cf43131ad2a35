import type { Table } from '../protocol/page-table';
import type { Plan } from '../protocol/plan';
import type { IndividualLevel, Result } from '../protocol/result';
import { pText, referenceText } from './coefficients';
import { count, decimalsBy, exact, interval, levelText, number, pIs, plural } from './numbers';

/** What the respondents' own least squares is, and how it stands to the fit of the cells; nothing where no deviations inside cells are given. */
export function individualSentences(result: Result): string[] {
  const { individualLevel: own, plan } = result;
  if (plan.roles.withinSd === null) return [];
  if (own === null) return [whyNot(plan)];
  const { persons, residualFreedom, withinSd, rSquared } = own;
  const inside =
    withinSd === null
      ? ''
      : ` Inside cells answers spread by ${number(withinSd, { digits: 3 })} (one deviation, pooled).`;
  const explained =
    rSquared === null
      ? ''
      : ` The terms explain ${number(100 * rSquared, { digits: 3 })} % of the variance of persons.`;
  return [
    `Means, sizes and the deviations in ${plan.roles.withinSd} give what least squares on the ${plural(persons, 'respondent')} themselves would give, to the digit: every person counts once and has the same variance around the terms; t on ${exact(residualFreedom)}.${inside}${explained}`,
    lackOfFit(own),
    'Its errors take persons as independent. What sets cells apart is shared by all persons of a cell, so that these errors are too small wherever cells differ beyond the terms: they are shown beside, not instead.',
  ];
}

function lackOfFit({ lackOfFit: test }: IndividualLevel): string {
  if (test === null)
    return 'Whether cells differ beyond the terms by more than persons inside them cannot be tested here.';
  const { statistic, freedom1, freedom2, p } = test;
  const found = `F = ${number(statistic, { digits: 3 })} on ${exact(freedom1)} and ${exact(freedom2)}, ${pIs(p)}`;
  return p < 0.05
    ? `Cells scatter around the terms by more than their persons do inside them (${found}): persons of one cell are not independent.`
    : `Cells scatter around the terms no more than their persons inside them would make them (${found}).`;
}

function whyNot(plan: Plan): string {
  return plan.outcomeScale === 'identity'
    ? `The deviations in ${plan.roles.withinSd} cannot be carried over to the respondents: sizes must be 1 or more, deviations not negative, and persons more than coefficients.`
    : `The deviations in ${plan.roles.withinSd} are those of the outcome as it stands; what least squares on the respondents would give on the ${plan.outcomeScale} scale cannot be had from them.`;
}

/** Every coefficient as the respondents' own least squares would give it, beside that of the cells; null without it. */
export function individualTable({ individualLevel: own, fit }: Result): Table | null {
  if (own === null) return null;
  const left = (text: string, breadth = 1) => ({ text, align: 'left' as const, breadth });
  const right = (text: string, breadth = 1) => ({ text, align: 'right' as const, breadth });
  const level = levelText(fit.inference.level);
  return {
    caption: individualWords.caption(count(own.persons)),
    head: [
      left('term', 2),
      right('by persons'),
      right(`${level} interval`, 2),
      right('error'),
      right('reference'),
      right('p'),
      right('of the cells'),
      right('its error'),
    ],
    rows: own.coefficients.map((one) => {
      const cells = fit.coefficients.find(({ term }) => term === one.term);
      const decimals = decimalsBy(one.se, one.estimate) + 1;
      const shown = (value: number | null) => ({ value, text: number(value, { decimals }) });
      return [
        { value: null, text: one.term },
        shown(one.estimate),
        { value: one.low, text: interval(one.low, one.high, { decimals }) },
        shown(one.se),
        { value: one.reference?.freedom ?? null, text: referenceText(one.reference) },
        { value: one.p, text: pText(one) },
        shown(cells?.estimate ?? null),
        shown(cells?.se ?? null),
      ];
    }),
  };
}

export const individualWords = {
  heading: 'As the respondents’ own least squares',
  caption: (persons: string): string => `Least squares on ${persons} respondents, from means, sizes and deviations`,
};
