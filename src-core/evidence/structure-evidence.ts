import type { Fitted } from '../estimate/fitted';
import type { Design } from '../model/design';
import type { Plan } from '../protocol/plan';
import type { Evidence, EvidenceTest } from '../protocol/result';
import type { Hooks } from '../protocol/source';
import type { Cells } from '../table/cells';
import { dumouchelDuncan } from './added-columns';
import { boundaryLikelihoodRatios } from './boundary';
import { brownForsythe } from './brown-forsythe';
import { dependenceOf } from './dependence';
import { type Frame, frameOf } from './frame';
import { goldfeldQuandt } from './goldfeld-quandt';
import { heterogeneity } from './heterogeneity';
import { normalityOf } from './normality';
import { notApplicable, withDeparture } from './reading';
import { breuschPagan, koenker, sizeScore, sizeScoreStudentised, white } from './score-test';
import { sizeSlope } from './size-slope';
import { withVarianceDeparture } from './variance-departure';
import type { VarianceTest } from './variance-test';

/** Tests that the stated variances are right up to a factor, in the order in which they are told. */
const varianceTests: readonly [EvidenceTest, (frame: Frame) => VarianceTest | Evidence][] = [
  ['breusch-pagan', breuschPagan],
  ['koenker', koenker],
  ['size-score', sizeScore],
  ['size-score-studentised', sizeScoreStudentised],
  ['size-slope', sizeSlope],
  ['white', white],
  ['goldfeld-quandt', goldfeldQuandt],
  ['brown-forsythe', brownForsythe],
];

/**
 * What the data say of the variance structure: result.evidence, every test of the contract at least once.
 *
 * A test without a say under the structure stands with null figures, the reading "not-applicable" and `detail.why`; dependence has
 * one entry for every pairing of cells. Readings are at level .05; beside each test stands the smallest departure that it would find
 * with power .8, or `detail.departureWhy`. Tests that read whitened residuals say nothing of correlated cells: those depend on the root chosen. Under a target other than "structure" residuals are those weighted by the structure.
 * hooks: `cancelled` is asked between draws; a cancelled run ends soon, without departures.
 *
 * Source: METHODS.md of the program's design, section 4.
 */
export function structureEvidence(known: {
  readonly fitted: Fitted;
  readonly cells: Cells;
  readonly plan: Plan;
  readonly design: Design;
  readonly hooks?: Hooks | undefined;
}): Evidence[] {
  const { hooks } = known;
  const frame = frameOf(known);
  const cancelled = () => hooks?.cancelled() ?? false;
  const silent = frame.freedom < 1 ? 'no-residual-freedom' : frame.perfect ? 'no-residuals' : null;
  const unread = silent ?? (known.fitted.correlated ? 'correlated' : null);
  const onResiduals = (test: EvidenceTest, run: () => Evidence): Evidence =>
    unread === null ? run() : notApplicable(test, unread);

  return [
    ...varianceTests.map(([test, prepare], i) => {
      hooks?.progress('evidence', i / (varianceTests.length + 1));
      return onResiduals(test, () => {
        const prepared = prepare(frame);
        return 'test' in prepared ? prepared : withVarianceDeparture({ frame, test: prepared, cancelled });
      });
    }),
    onResiduals('dumouchel-duncan', () => withoutDeparture(dumouchelDuncan(frame))),
    ...dependenceOf(frame, cancelled),
    heterogeneity(frame, cancelled),
    ...boundaryLikelihoodRatios(frame, cancelled),
    onResiduals('shapiro-wilk', () => withoutDeparture(normalityOf(frame))),
  ];
}

function withoutDeparture(evidence: Evidence): Evidence {
  return evidence.p === null ? evidence : withDeparture(evidence, 'not-defined');
}
