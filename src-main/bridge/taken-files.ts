import { done, type Outcome, refuse } from '@core/protocol/outcome';
import { sha256Of } from '../project/sha256';

/** So much of them stays in memory; one file always has room. In bytes. */
const ROOM = 256_000_000;

/** Files taken in and not yet part of any plan, by hash: in memory until a plan or a draft names them. */
export class TakenFiles {
  readonly #files = new Map<string, Uint8Array>();

  /** Answers the hash. */
  take(bytes: Uint8Array): string {
    const sha256 = sha256Of(bytes);
    this.#files.delete(sha256);
    this.#files.set(sha256, bytes);
    this.#tidy();
    return sha256;
  }

  bytesOf(sha256: string): Uint8Array | null {
    return this.#files.get(sha256) ?? null;
  }

  /** Those taken in longest ago make room; one file always has it. */
  #tidy(): void {
    let total = [...this.#files.values()].reduce((sum, { length }) => sum + length, 0);
    for (const [sha256, { length }] of this.#files) {
      if (total <= ROOM) return;
      this.#files.delete(sha256);
      total -= length;
    }
  }
}

/** limit: the largest size that is taken by the way that the file came, in bytes. */
export function checkSize(file: string, size: number, limit: number): Outcome<null> {
  return size > limit ? refuse('file-too-large', { file, size, limit }) : done(null);
}
