import type { Door } from '@core/protocol/channels';

declare global {
  interface Window {
    readonly steelyard: Door;
  }
}
