import { done, type Outcome, refuse } from '@core/protocol/outcome';
import { tooLarge } from '@core/words/screen-machine';
import { sha256Of } from '../project/sha256';

/** Larger files are no tables of cells; in bytes. */
export const LARGEST = 32_000_000;

/** Files taken in and not yet part of any plan, by hash: in memory until a plan or a draft names them. */
export class TakenFiles {
  readonly #files = new Map<string, Uint8Array>();

  /** Answers the hash. Refusal: a file that is too large. */
  take(name: string, bytes: Uint8Array): Outcome<string> {
    const fits = checkSize(name, bytes.length);
    if (!fits.ok) return fits;
    const sha256 = sha256Of(bytes);
    this.#files.delete(sha256);
    this.#files.set(sha256, bytes);
    this.#tidy();
    return done(sha256);
  }

  bytesOf(sha256: string): Uint8Array | null {
    return this.#files.get(sha256) ?? null;
  }

  /** Those taken in longest ago make room; one file always has it. */
  #tidy(): void {
    let total = [...this.#files.values()].reduce((sum, { length }) => sum + length, 0);
    for (const [sha256, { length }] of this.#files) {
      if (total <= 8 * LARGEST) return;
      this.#files.delete(sha256);
      total -= length;
    }
  }
}

export function checkSize(file: string, size: number): Outcome<null> {
  return size > LARGEST ? refuse('cannot-read', { file, reason: tooLarge(size, LARGEST) }) : done(null);
}
