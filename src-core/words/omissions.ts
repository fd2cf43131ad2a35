import type { OmissionCode } from '../protocol/result';

/** Why a row is left out, after a count: "5 suppressed as confidential". */
export function omissionPhrase(code: string): string {
  return (phrases as { readonly [code: string]: string | undefined })[code] ?? code;
}

/** Statuses that leave a cell without a value, wherever they are told. */
export const valuelessPhrases = {
  'suppressed-confidential': 'suppressed as confidential',
  'suppressed-unreliable': 'suppressed as unreliable',
  'suppressed-unknown': 'suppressed, the reason unknown',
  'not-collected': 'not collected',
  'not-applicable': 'not applicable',
  interval: 'known as an interval only',
} as const;

const phrases: { readonly [C in OmissionCode]: string } = {
  'omit-rule': 'left out by a rule of the plan',
  missing: 'with a missing value',
  'not-above-zero': 'with a size or error that is not above zero',
  ...valuelessPhrases,
  blank: 'left blank',
};
