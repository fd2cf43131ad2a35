import { normalTwoSided } from '../numbers/distributions';
import { plainDot, plainSquares } from '../numbers/sums';
import type { Evidence } from '../protocol/result';
import { dependenceDeparture } from './dependence-departure';
import type { Frame } from './frame';
import { momentsOf } from './moran';
import { type Pairs, pairingsOf, partnerSums } from './pairs';
import { evidenceOf, notApplicable, withDeparture } from './reading';

/**
 * Dependence between cells: one entry for every pairing of cells that the plan offers.
 *
 *     I = (G / sum B) r~'B r~ / r~'r~,  z = (I - E) / root V,  normal, two-sided
 *
 * detail: by, order, neighbours (the list's file), expectation, variance, z, pairs (each counted once).
 * z, p and variance null where the model absorbs the groups. Without any pairing one entry says so.
 * Source: Moran 1950; Cliff & Ord 1981.
 */
export function dependenceOf(frame: Frame, cancelled: () => boolean): Evidence[] {
  const pairings = pairingsOf(frame.cells, frame.plan);
  if (pairings.length === 0) return [notApplicable('dependence', 'no-grouping')];
  return pairings.map((pairs) => dependenceBy(frame, { pairs, cancelled }));
}

function dependenceBy(frame: Frame, asked: { pairs: Pairs; cancelled: () => boolean }): Evidence {
  const { pairs, cancelled } = asked;
  const named = { by: [...pairs.by], order: pairs.order, neighbours: pairs.neighbours, pairs: pairs.total / 2 };
  if (frame.freedom < 1) return notApplicable('dependence', 'no-residual-freedom', named);
  if (frame.fitted.correlated) return notApplicable('dependence', 'correlated', named);
  if (frame.perfect) return notApplicable('dependence', 'no-residuals', named);
  const moments = momentsOf(frame, pairs);
  const { expectation, variance } = moments;
  const statistic = statisticOf(pairs, frame.residuals);
  if (variance === null) {
    const detail = { ...named, expectation, variance, z: null, why: 'absorbed' };
    return evidenceOf('dependence', { statistic, p: null, detail });
  }
  const z = (statistic - expectation) / Math.sqrt(variance);
  const detail = { ...named, expectation, variance, z };
  const evidence = evidenceOf('dependence', { statistic, p: normalTwoSided(z), detail });
  return withDeparture(evidence, dependenceDeparture({ frame, pairs, cancelled, moments: { ...moments, variance } }));
}

function statisticOf(pairs: Pairs, residuals: Float64Array): number {
  const scale = residuals.length / pairs.total;
  return (scale * plainDot(residuals, partnerSums(pairs, residuals))) / plainSquares(residuals);
}
