import { mkdirSync, readFileSync } from 'node:fs';
import { basename, join } from 'node:path';
import type { StartLook } from '@core/protocol/bridge';
import { writeWhole } from '../project/write-whole';

type Recent = StartLook['recent'][number];

const MOST = 12;

/** The projects opened last, the newest first: a small file in the profile folder. One that is unreadable counts as empty. */
export class RecentList {
  readonly #file: string;
  #list: readonly Recent[];

  constructor(profile: string) {
    this.#file = join(profile, 'recent.json');
    this.#list = read(this.#file);
  }

  get list(): readonly Recent[] {
    return this.#list;
  }

  has(file: string): boolean {
    return this.#list.some((one) => one.file === file);
  }

  add(file: string, opened: string): void {
    const others = this.#list.filter((one) => one.file !== file);
    this.#keep([{ file, name: projectName(file), opened }, ...others].slice(0, MOST));
  }

  forget(): void {
    this.#keep([]);
  }

  /** A list that cannot be written is kept while the program runs: no reason to refuse anything. */
  #keep(list: readonly Recent[]): void {
    this.#list = list;
    try {
      mkdirSync(join(this.#file, '..'), { recursive: true });
    } catch {
      return;
    }
    writeWhole(this.#file, `${JSON.stringify(list, null, 1)}\n`);
  }
}

function read(file: string): readonly Recent[] {
  try {
    const found: unknown = JSON.parse(readFileSync(file, 'utf8'));
    return Array.isArray(found) ? found.filter(isRecent).slice(0, MOST) : [];
  } catch {
    return [];
  }
}

function isRecent(value: unknown): value is Recent {
  const one = value as Partial<Record<keyof Recent, unknown>> | null;
  return typeof one?.file === 'string' && typeof one.name === 'string' && typeof one.opened === 'string';
}

/** A project's name: that of its file, without folder and ending. */
export function projectName(file: string): string {
  return basename(file, '.steelyard');
}
