import type { Decimals } from '../numbers/decimals';
import { log } from '../numbers/elementary';
import type { BlockFactor } from './block-factor';
import type { BlockForm, RanksForm, SerialForm } from './block-form';
import {
  backwardChain,
  chainOf,
  inverseDiagonalOfChain,
  rootChain,
  unwhitenChain,
  whitenChain,
  wideChainWhitening,
} from './chain';
import { backwardRanks, inverseTerms, rankRootsOf, rootRanks, unwhitenRanks, whitenRanks } from './rank-roots';
import { wideRankWhitening } from './wide-ranks';

/** The factor of a block by its form: all that it does costs n, or n times the terms that cross. Null where the block is not positive definite. */
export function formFactor(form: BlockForm): BlockFactor | null {
  return form.kind === 'ranks' ? ranksFactor(form) : chainFactor(form);
}

function ranksFactor(form: RanksForm): BlockFactor | null {
  const own = rankRootsOf(form);
  if (!own) return null;
  let logDeterminant = 0;
  for (const root of own.roots) logDeterminant += 2 * log(root);
  for (const { growth } of own.factors) logDeterminant += log(growth);
  return {
    whiten: (x) => whitenRanks(own, x),
    whitenWide: madeOnce(() => wideRankWhitening(form)),
    wide: true,
    unwhiten: (x) => unwhitenRanks(own, x),
    backwards: (x) => backwardRanks(own, x),
    root: (x) => rootRanks(own, x),
    logDeterminant,
    inverseDiagonal: () => {
      const diagonal = own.roots.map((root) => 1 / root / root);
      for (const { vector, places, gamma } of inverseTerms(own))
        for (let a = 0; a < places.length; a++) {
          const i = places[a] as number;
          diagonal[i] = (diagonal[i] as number) - gamma * (vector[a] as number) * (vector[a] as number);
        }
      return diagonal;
    },
  };
}

function chainFactor(form: SerialForm): BlockFactor | null {
  const chain = chainOf(form);
  if (!chain) return null;
  let logDeterminant = 0;
  for (const root of chain.roots) logDeterminant += 2 * log(root);
  for (const s of chain.news) logDeterminant += 2 * log(s);
  return {
    whiten: (x) => whitenChain(chain, x),
    whitenWide: madeOnce(() => wideChainWhitening(form)),
    wide: true,
    unwhiten: (x) => unwhitenChain(chain, x),
    backwards: (x) => backwardChain(chain, x),
    root: (x) => rootChain(chain, x),
    logDeterminant,
    inverseDiagonal: () => inverseDiagonalOfChain(chain),
  };
}

/** A whitening that is prepared when first asked for. */
function madeOnce(make: () => (x: Decimals) => void): (x: Decimals) => void {
  let made: ((x: Decimals) => void) | null = null;
  return (x) => (made ??= make())(x);
}
