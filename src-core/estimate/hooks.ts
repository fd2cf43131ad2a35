/** What a long step asks of its caller now and then. */
export interface Hooks {
  /** True once the answer is no longer wanted: the step ends with `cancelled`. */
  readonly cancelled?: () => boolean;
}
