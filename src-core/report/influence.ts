import { beamFigure } from '../figures/beam-figure';
import { concentrationFigure } from '../figures/concentration-figure';
import type { Block, Cell, MarginNote } from '../protocol/document';
import type { Beam, Coefficient, Overturn, Result } from '../protocol/result';
import {
  beamSentence,
  concentrationSentence,
  heaviestWithHalf,
  mostMovingSentence,
  outstandingSentence,
} from '../words/beams';
import { changePhrase, crossingName } from '../words/changes';
import { definitions } from '../words/definitions';
import { captionValue, figureWords, howToRead } from '../words/figures';
import { captions, headings, heads } from '../words/headings';
import { answeredTerms } from '../words/headline';
import { decimalsBy, levelText, rangeText } from '../words/numbers';
import { influenceLead, overturnMore } from '../words/remarks';
import { figure, heading, left, num, paragraph, right, sentences, table, valued, words } from './blocks';
import { cellTable } from './cells';
import { decimalsOf } from './coefficient-rows';

const CHANGES = 12;
const CELLS = 8;

/** Which cells carry the answer: weights, beam, deletions. */
export function influenceBlocks(result: Result): Block[] {
  const { plan, fit } = result;
  const out = (key: string): boolean => plan.report.omit.includes(key);
  const terms = answeredTerms(result);
  const coefficient = (term: string): Coefficient => fit.coefficients.find((one) => one.term === term) as Coefficient;
  const blocks = [
    ...(out('effectiveCells')
      ? []
      : [
          ...paragraph(concentrationSentence(result)),
          ...figure(concentrationFigure(result), [
            { about: howToRead, text: figureWords.concentration.read(halfOf(result), result.cells.length) },
          ]),
        ]),
    ...(out('beam')
      ? []
      : terms.flatMap((term) => {
          const beam = result.beam.find((one) => one.term === term);
          return beam === undefined
            ? []
            : [
                ...paragraph(beamSentence(beam, coefficient(term), plan), [definitions.pull]),
                ...figure(beamFigure(result, term), [beamNote(result, beam, coefficient(term))]),
              ];
        })),
    ...(out('cells')
      ? []
      : [
          ...paragraph(
            sentences(
              influenceLead,
              ...terms.map((term) => mostMovingSentence(result, term)),
              outstandingSentence(result),
            ),
            [definitions.leverage],
          ),
          ...cellTable(result, { caption: captions.influential, most: CELLS }),
        ]),
  ];
  return blocks.length === 0 ? [] : [heading(2, headings.influence), ...blocks];
}

function halfOf({ cells }: Result): number {
  return heaviestWithHalf(cells.map(({ weightShare }) => weightShare).sort((a, b) => b - a));
}

function beamNote(result: Result, { contributions, heaviest }: Beam, own: Coefficient): MarginNote {
  const value = captionValue(own.estimate, decimalsBy(own.se, own.estimate), result);
  const from = contributions === null ? 'zero' : 'mean';
  return { about: howToRead, text: figureWords.beam.read({ half: heaviest.cells.length, value, from }) };
}

/** Changes tried on any coefficient, the largest shift first. */
export function overturnBlocks(result: Result): Block[] {
  const { overturn, fit, plan } = result;
  if (overturn.length === 0) return [];
  const shown = chosenChanges(result);
  const rest = overturn.length - shown.length;
  return [
    heading(2, headings.overturn),
    ...table(
      {
        caption: captions.overturn,
        head: [
          left(heads.term, 1.4),
          left(heads.change, 2.6),
          right(heads.estimate),
          right(heads.interval(levelText(fit.inference.level))),
          right(heads.shift),
          left(heads.crosses),
        ],
        rows: shown.map((one) =>
          changeRow(one, fit.coefficients.find((c) => c.term === one.term) as Coefficient, plan),
        ),
        ...(rest > 0 ? { note: overturnMore(rest) } : {}),
      },
      [definitions.overturn],
    ),
  ];
}

/** Those that cross something first come in any case; then the largest shifts, at most so many of one kind and term that others are seen. */
function chosenChanges({ overturn }: Result): Overturn[] {
  const crossing = overturn.filter(({ crosses }) => crosses !== null).slice(0, CHANGES);
  const others = overturn
    .filter((one) => !crossing.includes(one))
    .slice(0, CHANGES - Math.min(CHANGES - 4, crossing.length));
  return overturn.filter((one) => crossing.includes(one) || others.includes(one));
}

function changeRow(one: Overturn, own: Coefficient, plan: Result['plan']): Cell[] {
  const decimals = decimalsOf(own);
  const shift = own.se !== null && own.se > 0 ? (one.estimate - own.estimate) / own.se : null;
  return [
    words(one.term),
    valued(one.change.what, changePhrase(one.change, plan)),
    num(one.estimate, { decimals }),
    valued(one.low, rangeText(one.low, one.high, decimals)),
    num(shift, { decimals: 2 }),
    valued(one.crosses, one.crosses === null ? '' : crossingName(one.crosses)),
  ];
}
