import type { Block, Cell } from '../protocol/document';
import type { BesideResult, Price, Result } from '../protocol/result';
import { captions, headings, heads } from '../words/headings';
import { number, percent } from '../words/numbers';
import { structureName } from '../words/structures';
import { heading, left, right, table, valued, words } from './blocks';
import { decimalsOf } from './coefficient-rows';

/** More terms than these stand in result.json alone. */
const MOST_TERMS = 100;

/** Every coefficient under every structure, and what the rivals' weights cost each: a row a term, a column a structure. */
export function rivalAppendix(result: Result): Block[] {
  const { beside } = result;
  if (beside.length === 0) return [];
  const priced = beside.some(({ price }) => price.some(({ claimedOverActual }) => claimedOverActual !== null));
  return [
    heading(2, headings.appendixRivals),
    ...coefficientTable(result),
    ...priceTable(result, captions.costs, ({ cost, actualSe }) =>
      actualSe === null ? words('') : valued(cost, percent(cost)),
    ),
    ...(priced
      ? priceTable(result, captions.claims, ({ claimedOverActual: ratio }) =>
          valued(ratio, number(ratio, { digits: 3 })),
        )
      : []),
  ];
}

function coefficientTable({ plan, fit, beside }: Result): Block[] {
  const fits = [fit.coefficients, ...beside.map(({ coefficients }) => coefficients)];
  const names = [plan.variance, ...beside.map(({ variance }) => variance)].map(structureName);
  return table({
    caption: captions.everyCoefficient,
    head: [left(heads.term, 2), ...names.map((name) => right(name))],
    rows: fit.coefficients.slice(0, MOST_TERMS).map((own) => [
      words(own.term),
      ...fits.map((coefficients): Cell => {
        const one = coefficients.find(({ term }) => term === own.term);
        if (one === undefined) return words('');
        const decimals = decimalsOf(own);
        const error = one.se === null ? '' : ` (${number(one.se, { decimals })})`;
        return valued(one.estimate, `${number(one.estimate, { decimals })}${error}`);
      }),
    ]),
  });
}

function priceTable({ fit, beside }: Result, caption: string, cell: (price: Price) => Cell): Block[] {
  const of = (rival: BesideResult, term: string): Cell => {
    const price = rival.price.find((one) => one.term === term);
    return price === undefined ? words('') : cell(price);
  };
  return table({
    caption,
    head: [left(heads.term, 2), ...beside.map(({ variance }) => right(structureName(variance)))],
    rows: fit.coefficients
      .slice(0, MOST_TERMS)
      .map(({ term }) => [words(term), ...beside.map((rival) => of(rival, term))]),
  });
}
