import type { ColumnHead, Table } from '../protocol/page-table';
import type { Coefficient, Estimated, Evidence, QuestionResult, Result } from '../protocol/result';
import { changePhrase, crossingPhrase } from './changes';
import { pText, referenceText } from './coefficients';
import { testName } from './evidence-names';
import { fitLines } from './goodness';
import { count, decimalsBy, exact, interval, levelText, number, percent } from './numbers';
import { expectRows, questionText } from './questions';
import { departureText, foundText, pairedBy, readingNames } from './readings';
import { ruleName } from './rules';
import { differenceHead, differenceText, likelihoodDifference, parametersText } from './screen-candidates';
import { movedText } from './screen-fit';
import { structureTexts } from './screen-structure';
import { structureName } from './structures';

/** Tables of the screens: plain data, drawn, copied and saved from the same value. */

const left = (text: string, breadth = 1): ColumnHead => ({ text, align: 'left', breadth });
const right = (text: string, breadth = 1): ColumnHead => ({ text, align: 'right', breadth });
const said = (text: string) => ({ value: null, text });

/** One row a coefficient: name, estimate, interval, then error, reference, ratio, p; what moved since the last fit last. */
export function coefficientsTable(result: Result, before: Result | null): Table {
  const { fit } = result;
  return {
    caption: 'Coefficients',
    head: [
      left('term', 2),
      right('estimate'),
      right(`${levelText(fit.inference.level)} interval`, 2),
      right('error'),
      right('reference'),
      right('ratio'),
      right('p'),
      left('before'),
    ],
    rows: fit.coefficients.map((one) => [said(one.term), ...coefficientCells(one), said(movedText(before, one))]),
  };
}

/** Estimate, interval, error, reference, ratio and p of one coefficient. */
export function coefficientCells(one: Coefficient): Table['rows'][number] {
  const decimals = decimalsBy(one.se, one.estimate);
  return [
    { value: one.estimate, text: number(one.estimate, { decimals }) },
    said(interval(one.low, one.high, { decimals })),
    { value: one.se, text: number(one.se, { decimals }) },
    said(referenceText(one.reference)),
    { value: one.ratio, text: number(one.ratio, { digits: 3 }) },
    { value: one.p, text: pText(one) },
  ];
}

/** The stated structure and its candidates: parameters, likelihood difference, and one coefficient under each (null: covered). */
export function candidatesTable(result: Result, term: string | null): Table {
  const of = (coefficients: readonly Coefficient[]) => {
    const one = term === null ? undefined : coefficients.find((c) => c.term === term);
    return one === undefined
      ? []
      : [
          {
            value: one.estimate,
            text: `${number(one.estimate, { decimals: decimalsBy(one.se, one.estimate) })} (${interval(one.low, one.high, { decimals: decimalsBy(one.se, one.estimate) })})`,
          },
        ];
  };
  return {
    caption: structureTexts.candidatesHeading,
    head: [
      left('structure', 2),
      left('its parameters', 2),
      right(differenceHead(result.fit)),
      left(''),
      ...(term === null ? [] : [right(term, 2)]),
    ],
    rows: [
      [
        said(structureName(result.plan.variance)),
        said(parametersText(result.fit.variance)),
        said(''),
        said(structureTexts.stated),
        ...of(result.fit.coefficients),
      ],
      ...result.beside.map((rival) => {
        const difference = likelihoodDifference(result, rival);
        const { shown, remark } = differenceText(difference);
        return [
          said(structureName(rival.variance)),
          said(parametersText(rival.parameters)),
          { value: difference, text: shown },
          said(remark ?? ''),
          ...of(rival.coefficients),
        ];
      }),
    ],
  };
}

/** Errors of one coefficient: a row each structure taken as the truth, a column each weighting. */
export function squareTable(result: Result, term: string): Table {
  const structures = [result.plan.variance, ...result.beside.map(({ variance }) => variance)].map(structureName);
  const own = result.fit.coefficients.find((one) => one.term === term);
  const decimals = decimalsBy(own?.se ?? null) + 1;
  return {
    caption: `Standard errors of ${term}`,
    head: [left('if this holds', 2), ...structures.map((name) => right(name))],
    rows: structures.map((name, truth) => [
      said(name),
      ...structures.map((_, weighting) => {
        const se =
          result.square.find((one) => one.truth === truth && one.weighting === weighting && one.term === term)?.se ??
          null;
        return { value: se, text: number(se, { decimals }) };
      }),
    ]),
    note: 'Columns: the weighting used.',
  };
}

/** What each rival weighting claims of one coefficient and what it delivers if the stated structure holds. */
export function priceTable(result: Result, term: string): Table {
  const own = result.fit.coefficients.find((one) => one.term === term);
  const decimals = decimalsBy(own?.se ?? null) + 1;
  const error = (value: number | null) => ({ value, text: number(value, { decimals }) });
  return {
    caption: `The price of other weightings for ${term}`,
    head: [
      left('weights of', 2),
      right('error claimed'),
      right('claimed, as expected'),
      right('error in truth'),
      right('variance added'),
      right('claimed / true'),
    ],
    rows: result.beside.map(({ variance, price }) => {
      const one = price.find((entry) => entry.term === term);
      return [
        said(structureName(variance)),
        error(one?.claimedSe ?? null),
        error(one?.expectedClaimedSe ?? null),
        error(one?.actualSe ?? null),
        { value: one?.cost ?? null, text: percent(one?.cost ?? null) },
        { value: one?.claimedOverActual ?? null, text: number(one?.claimedOverActual ?? null, { digits: 3 }) },
      ];
    }),
  };
}

/** Every test of the structure: what was found, how it reads, the smallest departure that it would probably have found. */
export function evidenceTable(evidence: readonly Evidence[]): Table {
  return {
    caption: 'Tests of the structure',
    head: [left('test', 2), left('found', 2), left('reading'), left('smallest departure')],
    rows: evidence.map((one) => [
      said(testName(one.test, pairedBy(one))),
      { value: one.p, text: one.reading === 'not-applicable' ? '' : foundText(one) },
      said(readingNames[one.reading]),
      said(departureText(one)),
    ]),
  };
}

/** The cells whose loss moves one coefficient most. */
export function influenceTable(result: Result, term: string, most: number): Table {
  const j = result.fit.coefficients.findIndex((one) => one.term === term);
  const beam = result.beam.find((one) => one.term === term);
  const ranked = result.cells
    .map((cell, g) => ({ cell, pull: beam?.pulls[g] ?? null, shift: cell.coefficientShifts[j] ?? null }))
    .sort((a, b) => Math.abs(b.shift ?? 0) - Math.abs(a.shift ?? 0))
    .slice(0, most);
  return {
    caption: `Cells that move ${term} most`,
    head: [
      left('cell', 2),
      right('size'),
      right('share of weight'),
      right('pull'),
      right('leverage'),
      right('studentised residual'),
      right('shift, in its errors'),
    ],
    rows: ranked.map(({ cell, pull, shift }) => [
      said(cell.label),
      { value: cell.size, text: cell.size === null ? number(null) : exact(cell.size) },
      { value: cell.weightShare, text: percent(cell.weightShare) },
      { value: pull, text: number(pull, { digits: 3 }) },
      { value: cell.leverage, text: number(cell.leverage, { digits: 2 }) },
      { value: cell.studentisedWithout, text: number(cell.studentisedWithout, { digits: 3 }) },
      { value: shift, text: number(shift, { digits: 2 }) },
    ]),
  };
}

/** Model-based and robust errors next to each other. */
export function robustTable(result: Result): Table {
  return {
    caption: 'Robust errors beside',
    head: [left('term', 2), right('error'), right('robust error'), right('robust / model')],
    rows: (result.robustBeside ?? []).map(({ term, se, ratioToModel }) => {
      const own = result.fit.coefficients.find((one) => one.term === term);
      const decimals = decimalsBy(own?.se ?? se);
      return [
        said(term),
        { value: own?.se ?? null, text: number(own?.se ?? null, { decimals }) },
        { value: se, text: number(se, { decimals }) },
        { value: ratioToModel, text: number(ratioToModel, { digits: 3 }) },
      ];
    }),
  };
}

/** The changes tried on one coefficient, largest shift first. */
export function overturnTable(result: Result, term: string, most: number): Table {
  const own = result.fit.coefficients.find((one) => one.term === term);
  const decimals = decimalsBy(own?.se ?? null, own?.estimate ?? null);
  return {
    caption: `Changes tried on ${term}`,
    head: [left('change', 3), right('estimate'), right('interval', 2), left('crosses')],
    rows: result.overturn
      .filter((one) => one.term === term)
      .slice(0, most)
      .map(({ change, estimate, low, high, crosses }) => [
        said(changePhrase(change, result.plan)),
        { value: estimate, text: number(estimate, { decimals }) },
        said(interval(low, high, { decimals })),
        said(crosses === null ? '' : crossingPhrase(crosses)),
      ]),
  };
}

/** τ² by each rule, and one coefficient there. */
export function rulesTable(result: Result, term: string): Table {
  return {
    caption: 'τ² by several rules',
    head: [left('rule', 2), right('τ²'), right('profile interval', 2), right('Q-profile interval', 2), right(term, 2)],
    rows: result.betweenRules.map(({ rule, tau2, profileLow, profileHigh, qLow, qHigh, coefficients }) => {
      const one = coefficients.find((c) => c.term === term);
      return [
        said(ruleName(rule)),
        { value: tau2, text: number(tau2, { digits: 3 }) },
        said(interval(profileLow, profileHigh, { digits: 3 })),
        said(interval(qLow, qHigh, { digits: 3 })),
        {
          value: one?.estimate ?? null,
          text: number(one?.estimate ?? null, { decimals: decimalsBy(one?.se ?? null, one?.estimate ?? null) }),
        },
      ];
    }),
  };
}

/** The figures of the fit under their own names. */
export function goodnessTable(result: Result): Table {
  return {
    caption: 'Figures of the fit',
    head: [left('name', 2), right('value'), left('what it is', 3)],
    rows: fitLines(result).map(({ name, value, text, says }) => [said(name), { value, text }, said(says)]),
  };
}

/** The three intervals of an expectation, each by its name. */
export function expectTable(result: Result, { question, answer }: QuestionResult): Table | null {
  if (!('fitted' in answer)) return null;
  const names = expectRows(question);
  const row = (name: string, one: Estimated | null) => {
    const decimals = decimalsBy(one?.se ?? null, one?.estimate ?? null);
    return [
      said(name),
      { value: one?.estimate ?? null, text: number(one?.estimate ?? null, { decimals }) },
      said(one === null ? interval(null, null) : interval(one.low, one.high, { decimals })),
      { value: one?.se ?? null, text: number(one?.se ?? null, { decimals }) },
      said(referenceText(one?.reference ?? null)),
    ];
  };
  return {
    caption: question.name ?? questionText(question),
    head: [
      left('of', 2),
      right('estimate'),
      right(`${levelText(result.fit.inference.level)} interval`, 2),
      right('error'),
      right('reference'),
    ],
    rows: [
      row(names.fitted, answer.fitted),
      row(names.newCellTrue, answer.newCellTrue),
      row(names.newCellObserved, answer.newCellObserved),
    ],
  };
}

/** Several plans: a row a term, a column a plan. */
export function plansTable(plans: readonly { readonly name: string; readonly result: Result }[]): Table {
  const terms = [...new Set(plans.flatMap(({ result }) => result.fit.coefficients.map(({ term }) => term)))];
  return {
    caption: 'Plans beside each other',
    head: [left('term'), ...plans.map(({ name }) => right(name))],
    rows: [
      ...terms.map((term) => [
        said(term),
        ...plans.map(({ result }) => {
          const one = result.fit.coefficients.find((c) => c.term === term);
          if (one === undefined) return said('');
          const decimals = decimalsBy(one.se, one.estimate);
          return {
            value: one.estimate,
            text: `${number(one.estimate, { decimals })} (${interval(one.low, one.high, { decimals })})`,
          };
        }),
      ]),
      [said('cells used'), ...plans.map(({ result }) => ({ value: result.data.used, text: count(result.data.used) }))],
      [said('structure'), ...plans.map(({ result }) => said(structureName(result.plan.variance)))],
    ],
  };
}
