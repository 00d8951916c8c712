/** A part of Moorline that runs: collector, evaluator or gateway. */
export interface RunningService {
  readonly name: string;
  /** Finishes what is at hand, writes what must be kept, then resolves. Calling it twice is the same as once. */
  stop(): Promise<void>;
  /** Settles when the service ends by itself: resolves at the end of a finished source, rejects when it cannot go on. */
  readonly ended: Promise<void>;
}
