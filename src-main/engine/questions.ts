import type { EditionFacts, NoteFacts } from '@core/index';
import type { DataComparison, DataPreview } from '@core/protocol/bridge';
import type { PackedLook } from '@core/protocol/data-look';
import type { ReportDocument } from '@core/protocol/document';
import type { Outcome } from '@core/protocol/outcome';
import type { Read } from '@core/protocol/plan';
import type { ShelfName } from './shelf';

/** A plan as text, with its files. */
export interface PlanAsk {
  readonly plan: string;
  readonly inputs: readonly ShelfName[];
}

/** What the engine's thread can be asked. */
export interface EngineAsks {
  readonly preview: ShelfName & { readonly read: Read };
  readonly look: PlanAsk;
  readonly compare: {
    readonly plan: string;
    readonly before: readonly ShelfName[];
    readonly after: readonly ShelfName[];
  };
  readonly run: PlanAsk;
  /** notes: of a plan as it stands; an edition has its own. */
  readonly print: {
    readonly result: string;
    readonly edition: EditionFacts | null;
    readonly notes?: readonly NoteFacts[];
  };
}

export interface EngineAnswers {
  readonly preview: DataPreview;
  readonly look: PackedLook;
  readonly compare: DataComparison;
  /** The result as the one text that is written, stored and hashed. */
  readonly run: string;
  readonly print: { readonly pdf: Uint8Array; readonly document: ReportDocument };
}

export type EngineKind = keyof EngineAsks;

export type ToEngine =
  | { readonly kind: 'bytes'; readonly sha256: string; readonly bytes: Uint8Array }
  | {
      readonly kind: 'ask';
      readonly question: EngineKind;
      readonly ask: EngineAsks[EngineKind];
      /** One 32-bit flag: 1 asks the work to stop. */
      readonly flag: SharedArrayBuffer;
    };

export type FromEngine =
  | { readonly kind: 'progress'; readonly step: string; readonly share: number }
  /** These files are no longer at hand. */
  | { readonly kind: 'tidied'; readonly gone: readonly string[] }
  | { readonly kind: 'answer'; readonly outcome: Outcome<EngineAnswers[EngineKind]> };
