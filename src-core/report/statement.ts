import { FEWEST_FOR_MEANS, squaredResiduals } from '../figures/squared-residuals';
import type { Block, Table } from '../protocol/document';
import type { Evidence, Result } from '../protocol/result';
import { definitions } from '../words/definitions';
import { modelEquation, varianceEquation } from '../words/equations';
import { figureWords, howToRead } from '../words/figures';
import { chiSquareSentence } from '../words/goodness';
import { captions, headings, heads } from '../words/headings';
import { headlineTerm } from '../words/headline';
import { covarianceEquation } from '../words/linked-cells';
import { interval, levelText, number } from '../words/numbers';
import { candidatesSentence } from '../words/prices';
import { readingSentences } from '../words/readings';
import { noOrder } from '../words/remarks';
import {
  independenceSentence,
  methodSentence,
  samplingShareSentence,
  targetSentence,
  triedSentence,
  varianceSentence,
  workedCell,
} from '../words/statement';
import { parameterMeaning, parameterSign, structureName } from '../words/structures';
import { unitRemark, varianceUnit } from '../words/units';
import { figure, heading, left, num, paragraph, right, sentences, table, valued, words } from './blocks';

/** The variance structure as one statement with its equation, then what speaks for it and against it. */
export function statementBlocks(result: Result, tried: number): Block[] {
  const { plan, fit } = result;
  const term = headlineTerm(result);
  const model = modelEquation(
    plan,
    fit.coefficients.map((one) => one.term),
  );
  const equation = varianceEquation(result);
  const covariance = covarianceEquation(result);
  const typical = typicalCell(result);
  return [
    heading(2, headings.variance),
    ...paragraph(
      sentences(
        varianceSentence(result),
        methodSentence(result),
        targetSentence(result),
        independenceSentence(result),
        samplingShareSentence(result),
        triedSentence(result, { tried, term }),
      ),
      [
        definitions.errorVariance,
        ...(plan.variance.parts.some(({ kind }) => kind === 'between') ? [definitions.between] : []),
      ],
      'lead',
    ),
    { kind: 'equation', ...model },
    { kind: 'equation', ...equation, ...unitNote(result) },
    ...(covariance ? [{ kind: 'equation' as const, ...covariance }] : []),
    ...(typical !== undefined && fit.variance.every(({ estimate }) => estimate !== null)
      ? paragraph(workedCell(result, typical))
      : []),
    ...argument(result, term),
  ];
}

function unitNote({ plan }: Result): Pick<Extract<Block, { kind: 'equation' }>, 'margin'> | object {
  const unit = varianceUnit(plan);
  return unit === null ? {} : { margin: [unitRemark(unit)] };
}

/** The cell of median weight: one that a reader can check by hand. */
function typicalCell({ cells }: Result): Result['cells'][number] | undefined {
  const sorted = cells
    .map((cell, g) => ({ cell, g }))
    .sort((a, b) => a.cell.weightShare - b.cell.weightShare || a.g - b.g);
  return sorted[Math.floor(sorted.length / 2)]?.cell;
}

function argument(result: Result, term: string): Block[] {
  const { plan } = result;
  const omitted = (key: string): boolean => plan.report.omit.includes(key);
  const tests = omitted('evidence') ? [] : leading(result).map((one) => readingSentences(one, result, term));
  return [
    heading(3, headings.argument),
    ...paragraph(chiSquareSentence(result.fit)),
    ...tests.flatMap((text) => paragraph(text)),
    ...(omitted('beside') ? [] : candidates(result)),
    ...(result.fit.variance.every(({ estimate }) => estimate === null) ? [] : table(parameterTable(result))),
    ...figure(squaredResiduals(result), [
      { about: howToRead, text: figureWords.residuals.read(result.cells.length >= FEWEST_FOR_MEANS) },
    ]),
  ];
}

/** The test that bears most on the structure: whether variance still follows size, and whether the part above sampling is needed. */
function leading({ evidence }: Result): Evidence[] {
  const order = ['boundary-likelihood-ratio', 'heterogeneity', 'size-score-studentised', 'koenker'] as const;
  return order.flatMap((test) => evidence.filter((one) => one.test === test && one.p !== null)).slice(0, 2);
}

function candidates(result: Result): Block[] {
  const { plan, fit, beside } = result;
  if (beside.length === 0) return [];
  const restricted = fit.estimate.method === 'restricted';
  const of = (one: { logLikelihood: number | null; restrictedLogLikelihood: number | null }): number | null =>
    restricted ? one.restrictedLogLikelihood : one.logLikelihood;
  const own = of(fit);
  const rows = [
    { name: structureName(plan.variance), likelihood: own, unknown: fit.variance.filter((v) => !v.fixed).length },
    ...beside.map((one) => ({
      name: structureName(one.variance),
      likelihood: of(one),
      unknown: one.parameters.filter((v) => !v.fixed).length,
    })),
  ];
  if (rows.every(({ likelihood }) => likelihood === null)) return [];
  const less = (value: number | null): number | null => (value === null || own === null ? null : value - own);
  return [
    ...paragraph(
      sentences(
        candidatesSentence(rows.slice(1).map(({ name, likelihood }) => ({ name, difference: less(likelihood) }))),
      ),
    ),
    ...table({
      caption: captions.candidates,
      head: [
        left(heads.structure, 2),
        right(heads.unknown),
        right(restricted ? heads.restrictedLikelihood : heads.likelihood),
        right(heads.difference),
      ],
      rows: rows.map(({ name, likelihood, unknown }, i) => [
        words(name),
        num(unknown, { decimals: 0 }),
        num(likelihood, { decimals: 2 }),
        i === 0 ? words('') : num(less(likelihood), { decimals: 2 }),
      ]),
      note: noOrder,
    }),
  ];
}

function parameterTable({ plan, fit }: Result): Table {
  return {
    caption: captions.parameters,
    head: [
      left(heads.parameter),
      left(heads.meaning, 3),
      right(heads.estimate),
      right(heads.interval(levelText(fit.inference.level))),
      right(heads.error),
      right(heads.deviation),
    ],
    rows: fit.variance.map((one) => {
      const root =
        one.estimate !== null && one.estimate >= 0 && /^(phi|tau2|omega2)/.test(one.name)
          ? Math.sqrt(one.estimate)
          : null;
      return [
        words(parameterSign(one.name)),
        words(parameterMeaning(one.name, plan.variance)),
        num(one.estimate, { digits: 4 }),
        valued(one.low, interval(one.low, one.high, { digits: 3 })),
        num(one.se, { digits: 3 }),
        valued(root, root === null ? '' : number(root, { digits: 3 })),
      ];
    }),
  };
}
