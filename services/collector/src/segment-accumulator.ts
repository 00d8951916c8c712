import type { StreamConfig } from "@moorline/config";
import type { DecodedEvent } from "@moorline/decode";
import type { SegmentWrite } from "@moorline/store";
import { FeatureColumns } from "./feature-columns.js";
import type { SketchOptionsSource } from "./sketch-options.js";
import { OTHER_SLICE_VALUE, type SliceRegistry } from "./slice-registry.js";

/** The slice that holds every event. */
export const ALL_SLICE = "all";

interface Pane {
  readonly startMs: number;
  readonly all: FeatureColumns;
  /** By slice key, then by value. */
  readonly byValue: Map<string, FeatureColumns>[];
}

/** What one partition counted since its last checkpoint: columns by pane and slice. */
export class SegmentAccumulator {
  readonly #paneMs: number;
  readonly #features: readonly string[];
  readonly #sliceKeys: number;
  readonly #slices: SliceRegistry;
  readonly #options: SketchOptionsSource;
  readonly #panes = new Map<number, Pane>();
  #last: Pane | null = null;
  #heldBytes = 0;

  constructor(stream: StreamConfig, slices: SliceRegistry, options: SketchOptionsSource) {
    this.#paneMs = stream.paneMs;
    this.#features = stream.features.map((feature) => feature.name);
    this.#sliceKeys = stream.slices.length;
    this.#slices = slices;
    this.#options = options;
  }

  get heldBytes(): number {
    return this.#heldBytes;
  }

  add(event: DecodedEvent): void {
    const startMs = Math.floor(event.eventMs / this.#paneMs) * this.#paneMs;
    let pane = this.#last;
    if (pane === null || pane.startMs !== startMs) {
      pane = this.#panes.get(startMs) ?? this.#openPane(startMs);
      this.#last = pane;
    }
    const { values, missing, anyMissing } = event;
    let grown = pane.all.add(values, missing, anyMissing);

    for (let key = 0; key < this.#sliceKeys; key++) {
      const text = event.slices[key]!;
      const columns = pane.byValue[key]!.get(text) ?? this.#openSlice(pane, key, text);
      grown += columns.add(values, missing, anyMissing);
    }
    this.#heldBytes += grown;
  }

  /** The segments of everything added, oldest pane first; the accumulator is empty afterwards. */
  take(): SegmentWrite[] {
    const segments: SegmentWrite[] = [];
    for (const pane of [...this.#panes.values()].sort((a, b) => a.startMs - b.startMs)) {
      segments.push(pane.all.toSegment(pane.startMs));
      for (const byValue of pane.byValue) {
        for (const columns of byValue.values()) segments.push(columns.toSegment(pane.startMs));
      }
    }
    this.#panes.clear();
    this.#last = null;
    this.#heldBytes = 0;
    return segments;
  }

  #openPane(startMs: number): Pane {
    const all = this.#openColumns(ALL_SLICE);
    const byValue = Array.from({ length: this.#sliceKeys }, () => new Map<string, FeatureColumns>());
    const pane = { startMs, all, byValue };
    this.#panes.set(startMs, pane);
    return pane;
  }

  /** Values beyond the limit share one entry and get none of their own: the map stays bounded. */
  #openSlice(pane: Pane, key: number, text: string): FeatureColumns {
    const admitted = this.#slices.admit(key, text);
    const byValue = pane.byValue[key]!;
    const found = admitted === OTHER_SLICE_VALUE ? byValue.get(OTHER_SLICE_VALUE) : undefined;
    if (found !== undefined) return found;

    const columns = this.#openColumns(this.#slices.nameOf(key, admitted));
    byValue.set(admitted, columns);
    return columns;
  }

  #openColumns(slice: string): FeatureColumns {
    const columns = new FeatureColumns(slice, this.#features, this.#options);
    this.#heldBytes += columns.heldBytes;
    return columns;
  }
}
