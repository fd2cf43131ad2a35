import { intervalsBeside } from '../figures/intervals-beside';
import { scanFigure } from '../figures/scan-figure';
import type { Block, MarginNote } from '../protocol/document';
import type { Coefficient, Result } from '../protocol/result';
import { definitions } from '../words/definitions';
import { figureWords, howToRead } from '../words/figures';
import { captions, headings, heads } from '../words/headings';
import { answeredTerms, headlineTerm, headlineTerms } from '../words/headline';
import { interval, levelText, number, percent, p as pText } from '../words/numbers';
import {
  breakEvenSentence,
  efficiencySentence,
  otherSharesSentence,
  priceRemark,
  priceSentence,
  reverseOf,
} from '../words/prices';
import { besideLead, noRivals, squareNote } from '../words/remarks';
import { ruleName } from '../words/rules';
import { scanRemark, scanSentence } from '../words/scans';
import { structureName } from '../words/structures';
import { figure, heading, left, list, num, paragraph, right, sentences, table, valued, words } from './blocks';
import { coefficientCells, coefficientHeads, decimalsOf } from './coefficient-rows';

/** What the other structures conclude of the answer. */
export function besideBlocks(result: Result): Block[] {
  const { beside, plan } = result;
  if (beside.length === 0) return [heading(2, headings.beside), ...paragraph(noRivals)];
  const terms = answeredTerms(result);
  return [
    heading(2, headings.beside),
    ...paragraph(besideLead(result)),
    ...figure(intervalsBeside(result)),
    ...paragraph(figureWords.beside.read, undefined, 'small'),
    ...terms.flatMap((term) => besideTable(result, term, structureName(plan.variance))),
  ];
}

/** One coefficient under the stated structure and each rival. */
export function besideTable(result: Result, term: string, own: string): Block[] {
  const pick = (all: readonly Coefficient[]): Coefficient | undefined => all.find((one) => one.term === term);
  const chosen = pick(result.fit.coefficients);
  if (chosen === undefined) return [];
  const decimals = decimalsOf(chosen);
  const rows = [
    { name: own, one: chosen },
    ...result.beside.map((rival) => ({ name: structureName(rival.variance), one: pick(rival.coefficients) })),
  ];
  return table({
    caption: captions.beside(term),
    head: [left(heads.structure, 2), ...coefficientHeads(result)],
    rows: rows.flatMap(({ name, one }) =>
      one === undefined ? [] : [[words(name), ...coefficientCells(one, decimals)]],
    ),
  });
}

/** What each rival's weights cost the answer if the stated structure holds, and the square of every truth by every weighting. */
export function priceBlocks(result: Result): Block[] {
  const { beside } = result;
  const term = headlineTerm(result);
  if (beside.length === 0) return [];
  const told = priceSentences(result, term);
  return [
    heading(2, headings.price),
    ...list(told, [definitions.price]),
    ...paragraph(sentences(told.length === 0 ? null : priceRemark, efficiencySentence(result))),
    ...priceTable(result, term, [definitions.claimed]),
    ...squareTable(result, term),
  ];
}

function priceSentences({ beside, fit, square }: Result, term: string): string[] {
  const own = fit.coefficients.find((one) => one.term === term);
  return beside.flatMap((rival, i) => {
    const price = rival.price.find((one) => one.term === term);
    const ownSe =
      square.find((one) => one.truth === 0 && one.weighting === 0 && one.term === term)?.se ?? own?.se ?? null;
    return price === undefined || ownSe === null || price.actualSe === null
      ? []
      : [priceSentence({ rival, price, ownSe, reverse: reverseOf(square, { rival: i + 1, term }) })];
  });
}

/** Prices of one coefficient under every rival. */
export function priceTable({ beside, fit }: Result, term: string, margin?: readonly MarginNote[]): Block[] {
  const own = fit.coefficients.find((one) => one.term === term);
  if (own === undefined) return [];
  const decimals = decimalsOf(own);
  const rows = beside.flatMap((rival) => {
    const price = rival.price.find((one) => one.term === term);
    if (price === undefined || price.actualSe === null) return [];
    return [
      [
        words(structureName(rival.variance)),
        num(price.actualSe, { decimals }),
        valued(price.cost, percent(price.cost)),
        num(price.claimedSe, { decimals }),
        num(price.expectedClaimedSe, { decimals }),
        valued(price.claimedOverActual, number(price.claimedOverActual, { digits: 3 })),
      ],
    ];
  });
  return table(
    {
      caption: captions.price(term),
      head: [
        left(heads.weights, 2),
        right(heads.actual),
        right(heads.cost),
        right(heads.claimed),
        right(heads.expected),
        right(heads.claimedOverActual),
      ],
      rows,
    },
    margin,
  );
}

/** Every structure as the truth, every weighting under it. */
function squareTable({ plan, beside, square, fit }: Result, term: string): Block[] {
  const own = fit.coefficients.find((one) => one.term === term);
  if (own === undefined || square.every(({ se }) => se === null) || plan.report.omit.includes('square')) return [];
  const names = [structureName(plan.variance), ...beside.map(({ variance }) => structureName(variance))];
  const se = (truth: number, weighting: number): number | null =>
    square.find((one) => one.truth === truth && one.weighting === weighting && one.term === term)?.se ?? null;
  return table({
    caption: captions.square(term),
    head: [left(heads.truth, 2), ...names.map((name) => right(name))],
    rows: names.map((name, truth) => [
      words(name),
      ...names.map((_, weighting) => num(se(truth, weighting), { decimals: decimalsOf(own) })),
    ]),
    note: squareNote,
  });
}

/** Where equal weights and weights by size are equally precise. */
export function breakEvenBlocks(result: Result): Block[] {
  const { breakEven, intraclass, plan } = result;
  if (breakEven.length === 0) return [];
  const known = plan.report.omit.includes('intraclass') ? null : intraclass;
  const term = headlineTerm(result);
  const own = breakEven.find((one) => one.term === term);
  return [
    heading(3, headings.breakEven),
    ...(own === undefined
      ? []
      : paragraph(breakEvenSentence({ term, share: own.intraclass, intraclass: known }), [definitions.breakEven])),
    ...paragraph(otherSharesSentence(breakEven.filter((one) => one.term !== term))),
  ];
}

/** The coefficient as the size exponent runs, with the supported range. */
export function scanBlocks(result: Result): Block[] {
  const { exponentSupport: support, fit, plan } = result;
  if (support === null || plan.report.omit.includes('exponentSupport')) return [];
  return [
    heading(3, headings.scan),
    ...paragraph(sentences(scanSentence(support, fit.coefficients, headlineTerms(result, 3)), scanRemark), [
      definitions.supported,
    ]),
    ...figure(scanFigure(result), [{ about: howToRead, text: figureWords.scan.read(levelText(fit.inference.level)) }]),
  ];
}

/** τ² under every rule, its intervals, and the coefficient at each. */
export function rulesBlocks(result: Result): Block[] {
  const { betweenRules } = result;
  if (betweenRules.length === 0) return [];
  const term = headlineTerm(result);
  const level = levelText(result.fit.inference.level);
  return [
    heading(3, headings.rules),
    ...table({
      caption: captions.rules,
      head: [
        left(heads.rule, 2),
        right('τ²'),
        right(`${heads.profile}, ${level}`),
        right(`${heads.q}, ${level}`),
        right(term),
        right(heads.interval(level)),
        right(heads.p),
      ],
      rows: betweenRules.map((one) => {
        const own = one.coefficients.find((c) => c.term === term);
        const decimals = own === undefined ? 3 : decimalsOf(own);
        return [
          words(ruleName(one.rule)),
          num(one.tau2, { digits: 4 }),
          valued(one.profileLow, interval(one.profileLow, one.profileHigh, { digits: 3 })),
          valued(one.qLow, interval(one.qLow, one.qHigh, { digits: 3 })),
          num(own?.estimate ?? null, { decimals }),
          valued(own?.low ?? null, interval(own?.low ?? null, own?.high ?? null, { decimals })),
          valued(own?.p ?? null, pText(own?.p ?? null)),
        ];
      }),
    }),
  ];
}
