import type { Estimate } from '../protocol/plan';

/** How a between variance was found, by the rule's name. */
export function ruleName(rule: string): string {
  return (ruleNames as { readonly [rule: string]: string | undefined })[rule] ?? rule;
}

const ruleNames = {
  'dersimonian-laird': 'DerSimonian-Laird moments',
  'paule-mandel': 'Paule-Mandel',
  hanushek: 'Hanushek / Lewis-Linzer moments',
  full: 'full likelihood',
  restricted: 'restricted likelihood',
} as const;

/** The method of estimation as a phrase after "by". */
export function methodPhrase(estimate: Estimate): string {
  switch (estimate.method) {
    case 'least-squares':
      return 'weighted least squares';
    case 'two-step':
      return 'two steps: the variance from unweighted residuals, then one weighted fit';
    case 'full':
      return 'full maximum likelihood';
    case 'restricted':
      return 'restricted maximum likelihood';
    case 'moments':
      return `moments (${ruleNames[estimate.rule]})`;
  }
}
