import { margin } from './margin.svelte';

export const placeNames = ['data', 'variance', 'fit', 'report', 'trail'] as const;
export type Place = (typeof placeNames)[number];

/** Where the reader is: the part of the page's address after the hash, so that links and the way back are the browser's own. */
class Places {
  at = $state<Place>('data');

  /** Follows the address from now on. */
  follow(): void {
    this.#read();
    window.addEventListener('hashchange', () => this.#read());
  }

  go(place: Place): void {
    location.hash = place;
    this.#read();
  }

  #read(): void {
    const named = location.hash.slice(1);
    const known = placeNames.find((place) => place === named);
    if (known === undefined || known === this.at) return;
    void margin.close({ focus: false });
    this.at = known;
  }
}

export const places = new Places();
