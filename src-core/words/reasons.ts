const reasons: ReadonlyMap<string, string> = new Map([
  [
    'outcome+count',
    'An outcome is a mean, rate or share as it stands; a count is divided by size or exposure. State one of them.',
  ],
  ['outcomeUnit+count', 'A count over size or exposure needs no unit. Leave outcomeUnit out.'],
  [
    'errorKind+errorLevel',
    'A level belongs to half-widths alone. State errorKind half-width, or leave errorLevel out.',
  ],
  ['per+exposure', 'A rate per so many needs an exposure. Name it under roles.exposure, or leave "per" out.'],
  ['group+decimal', 'One character cannot be both the decimal mark and the mark between thousands.'],
  ['group+delimiter', 'One character cannot both part the fields and stand between thousands.'],
  ['statuses+missing', 'One token is declared both as a status and as a missing code. Leave one of the two out.'],
  ['alsoBy+correction', 'Errors clustered two ways come with CR0 or CR1. Choose one of them.'],
  ['by+alsoBy', 'Both ways are the same columns. Leave alsoBy out.'],
  ['kind+correlation', 'This kind of part says itself how cells go together. Leave the correlation out.'],
  [
    'kind+exposure',
    'A binomial part is for proportions, and a count over an exposure is a rate. Choose the part "counts".',
  ],
  [
    'outcomeScale+exposure',
    'A logit is of a proportion, and a count over an exposure is a rate. Choose the scale "log".',
  ],
  [
    'outcomeScale+outcomeUnit',
    'A logit is of a proportion. State outcomeUnit share or percent, or choose another scale.',
  ],
  ['outcomeScale+addedHalf', 'Halves are added to counts under the scale "logit" alone. Leave addedHalf out.'],
  ['addedHalf+estimate', 'Under the method "full" counts of none and all are taken as they are. Leave addedHalf out.'],
  [
    'outcomeScale+estimate',
    'Counts on a log scale are fitted by the method "full" alone. State it, or leave "estimate" out.',
  ],
  [
    'outcomeScale+variance',
    'Counts on a log scale are fitted by maximum likelihood, with nothing beside the part "counts" and no correlation. Choose the scale "identity", or leave the other parts out.',
  ],
  [
    'variance+outcomeScale+estimate',
    'Maximum likelihood with a link has one part, without a correlation. Choose the method "restricted", which takes empirical logits or logs, or leave the other parts out.',
  ],
  [
    'target+estimate',
    'Maximum likelihood with a link has weights of its own. Choose the target "structure", or another method.',
  ],
  [
    'variance+estimate',
    'Least squares settles one scale of the whole structure, and moments one between part beside given errors or a matrix. Choose the method "restricted", or set the other parameters in "fixed".',
  ],
  [
    'variance+inference',
    'Knapp-Hartung inference is for a between part beside given errors or a matrix, and nothing else. Choose another inference.',
  ],
  [
    'estimate+inference',
    'Kenward-Roger inference is for the method "restricted". State it, or choose another inference.',
  ],
  [
    'target+inference',
    'This inference is for weights from the structure itself. Choose the target "structure", or another inference.',
  ],
]);

/** Why two keys exclude each other, and what to do. */
export function reasonFor(keys: readonly string[]): string {
  return reasons.get(keys.join('+')) ?? 'Leave one of them out.';
}
