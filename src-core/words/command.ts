import { list } from './numbers';

/** What each verb of the command line takes and does, in the order in which they are listed. */
const verbs: readonly (readonly [string, string])[] = [
  [
    'run PLAN.json --out FOLDER [--only result]',
    'fits the plan; writes result.json, report.pdf and cells.csv into the folder',
  ],
  ['plan PLAN.json', 'checks everything short of the fit; prints the plan with every default written out'],
  [
    'freeze PLAN.json --into PROJECT --author NAME',
    'keeps data, plan and fit in a project and freezes an edition of the report',
  ],
  ['check PROJECT', 'verifies the trail, rebuilds every edition and compares'],
  ['schema plan | tabulation | result', 'prints the JSON Schema'],
];

export function usage(): string {
  const width = Math.max(...verbs.map(([call]) => call.length));
  return [
    'steelyard: regression of cell means with a stated, tested and priced variance structure.',
    '',
    ...verbs.map(([call, does]) => `  ${call.padEnd(width)}  ${does}`),
    '',
    '  --json       messages on standard error as one JSON object a line',
    '  --help       this page',
    '  --version    the version',
    '',
    'Exit status: 0 done, 1 a fault of this program, 2 wrong usage, 3 bad input, 4 cannot be estimated or not available,',
    '5 a difference was found, 6 the machine refused, 7 withheld by disclosure rules, 130 cancelled.',
    '',
  ].join('\n');
}

export function written(files: readonly string[], folder: string): string {
  return `Wrote ${list(files)} in ${folder}.`;
}

export function frozen(edition: { readonly number: number; readonly file: string; readonly head: string }): string {
  return `Edition ${edition.number} is frozen in ${edition.file}. Head of the trail: ${edition.head}.`;
}

export function checked(found: {
  readonly file: string;
  readonly entries: number;
  readonly head: string;
  readonly editions: readonly { readonly number: number; readonly how: 'bytes' | 'numbers' }[];
}): string {
  const rebuilt = found.editions.map(({ number, how }) =>
    how === 'bytes'
      ? `Edition ${number}: rebuilt, and equal to the last byte.`
      : `Edition ${number}: frozen by another version; its numbers were rebuilt and agree, and its stored report is unaltered.`,
  );
  return [
    `${found.file}: the trail of ${found.entries} entries is whole. Its head is ${found.head}.`,
    'The chain shows an alteration only against a head that is kept elsewhere, such as on a printed report.',
    ...rebuilt,
  ].join('\n');
}
