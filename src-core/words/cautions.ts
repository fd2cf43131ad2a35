import type { CautionCode } from '../protocol/cautions';
import type { Plan } from '../protocol/plan';
import type { Caution } from '../protocol/result';
import type { CautionSentences } from './caution-parts';
import { answerCautions } from './cautions-of-answer';
import { claimCautions } from './cautions-of-claim';
import { recordCautions } from './cautions-of-record';

/** A new code does not compile until it has its sentence. */
const sentences: CautionSentences<CautionCode> = { ...answerCautions, ...claimCautions, ...recordCautions };

/**
 * The finding, its consequence in units of the coefficient, and what to do; with the outcome's unit where the plan is at hand.
 *
 *     cautionSentence({ code: 'log-of-means', group: 'limits-claim', facts: {} })
 */
export function cautionSentence({ code, facts }: Caution, plan: Plan | null = null): string {
  const say = (sentences as { readonly [code: string]: ((facts: unknown, plan: Plan | null) => string) | undefined })[
    code
  ];
  if (say === undefined) throw new RangeError(`no sentence for the caution ${code}`);
  return say(facts, plan);
}

/** Headings of the three groups. */
export const cautionGroupNames: { readonly [G in Caution['group']]: string } = {
  'changes-answer': 'Changes the answer',
  'limits-claim': 'Limits the claim',
  'for-record': 'For the record',
};

/** The two remarks that stand at the end of every report. */
export const standingCautions: readonly string[] = [
  'Associations between averages are not effects on persons: a slope across cells may differ in size and in sign from the slope among the people in them.',
  'Results that feed decisions on health, safety or law need the review of a qualified statistician. Whether this report may be released is for the custodian of the data to decide, under the custodian’s own disclosure rules.',
];
