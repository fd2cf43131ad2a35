/** What can be found wrong with a project file, after "is damaged:" and "is broken at entry 3:". */
const findings: Readonly<Record<string, string>> = {
  unreadable: 'it cannot be read as a database any more',
  'cut-off': 'its end is missing',
  pages: 'its pages do not fit together',
  'layout-altered': 'its tables are not those that this program makes',
  'guards-missing': 'what keeps its records from being changed was taken out',
  gap: 'an entry is missing',
  link: 'it does not name the entry before it',
  hash: 'its hash is not that of its text',
  plan: 'the plan that it records is not the one that is stored',
  input: 'a data file that it records is not the one that is stored',
  fit: 'the result that it records is not the one that is stored',
  edition: 'the edition that it records is not the one that is stored',
  unrecorded: 'the project holds a plan, a result or an edition that no entry records, so that entries are missing',
};

/** A finding of the project file as words; an unknown one as it stands. */
export function findingPhrase(finding: string): string {
  return Object.hasOwn(findings, finding) ? (findings[finding] as string) : finding;
}
