import type { Cell, ColumnHead, Table } from '../protocol/page-table';
import type { Coefficient, Need, Result } from '../protocol/result';
import { boundsText, survivalText, vertexNote } from './bounds';
import { captions, heads } from './headings';
import { decimalsBy, number, percent } from './numbers';
import { cellsText, personsText, takesCaption, takesNote } from './takes';

const left = (text: string, breadth = 1): ColumnHead => ({ text, align: 'left', breadth });
const right = (text: string): ColumnHead => ({ text, align: 'right' });
const said = (text: string): Cell => ({ value: null, text });

/** Decimals of a coefficient in these tables: three significant digits of its error. */
function decimalsFor(own: Coefficient | undefined): number {
  return decimalsBy(own?.se ?? null, own?.estimate ?? null) + (own?.se ? 1 : 0);
}

/** The range of every coefficient over values that are known to within limits; null where all are known. */
export function boundsTable(result: Result): Table | null {
  const { bounds, fit } = result;
  if (bounds.length === 0) return null;
  const again = bounds.some(({ refitted }) => refitted !== null);
  const note = vertexNote(result);
  return {
    caption: captions.bounds,
    head: [
      left(heads.term, 1.4),
      right(heads.estimate),
      right(heads.bounds),
      ...(again ? [right(heads.refitted)] : []),
      left(heads.sign),
      left(heads.significance),
    ],
    rows: bounds.map(({ term, low, high, refitted, survives }) => {
      const own = fit.coefficients.find((one) => one.term === term);
      const decimals = decimalsFor(own);
      return [
        said(term),
        { value: own?.estimate ?? null, text: number(own?.estimate ?? null, { decimals }) },
        { value: low, text: boundsText(low, high, decimals) },
        ...(refitted === null
          ? []
          : [{ value: refitted.low, text: boundsText(refitted.low, refitted.high, decimals) }]),
        { value: survives.sign, text: survivalText(survives.sign) },
        { value: survives.significance, text: survivalText(survives.significance) },
      ];
    }),
    ...(note === null ? {} : { note }),
  };
}

/** Common correlations that the table shows, of those that the result holds. */
const SHOWN = [0, 0.1, 0.2, 0.3, 0.4, 0.5];

/** Errors under an unknown common correlation of the cells' sampling errors; null where none were told. */
export function togetherTable({ commonCorrelation: rows, fit }: Result): Table | null {
  const shown = [...new Set(rows.map(({ rho }) => rho))].filter((rho) => SHOWN.includes(rho));
  if (shown.length === 0) return null;
  return {
    caption: captions.together,
    head: [left(heads.term, 1.4), ...shown.map((rho) => right(number(rho, { digits: 2 })))],
    rows: fit.coefficients.map((own) => [
      said(own.term),
      ...shown.map((rho) => {
        const value = rows.find((one) => one.term === own.term && one.rho === rho)?.se ?? null;
        return { value, text: number(value, { decimals: decimalsFor(own) }) };
      }),
    ]),
  };
}

/** Cells and persons that each coefficient would take; null where no error is defined. */
export function takesTable(result: Result): Table | null {
  const { whatItTakes: takes } = result;
  if (takes === null || takes.every(({ halfWidth }) => halfWidth === null)) return null;
  const withMatters = takes.some(({ matters }) => matters !== null);
  return {
    caption: takesCaption(result),
    head: [
      left(heads.term, 1.4),
      right(heads.samplingShare),
      right(heads.halfCells),
      right(heads.halfPersons),
      ...(withMatters ? [right(heads.mattersCells), right(heads.mattersPersons)] : []),
    ],
    rows: takes.map(({ term, samplingShare, halfWidth, matters }) => [
      said(term),
      { value: samplingShare, text: percent(samplingShare) },
      ...needCells(halfWidth),
      ...(withMatters ? needCells(matters) : []),
    ]),
    note: takesNote,
  };
}

function needCells(need: Need | null): Cell[] {
  if (need === null) return [said(number(null)), said(number(null))];
  return [
    { value: need.cells, text: cellsText(need.cells) },
    { value: need.persons, text: personsText(need.persons) },
  ];
}
