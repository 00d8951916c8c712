import type { FoundProblem } from "./config-problem.js";
import { formatDuration, parseDuration } from "./duration.js";
import { parsePath } from "./path-segments.js";

/**
 * Rules over more than one key. They read the config as it was written, so that they also speak when something else is wrong;
 * what has the wrong shape is passed over here, for the schema says so.
 */
export function crossFieldProblems(data: unknown): FoundProblem[] {
  const streams = listIn(data, "streams");
  return [
    ...duplicates(streams, "name", ["streams"], "another stream"),
    ...streams.flatMap((stream, index) => streamProblems(stream, ["streams", index])),
  ];
}

function streamProblems(stream: unknown, at: readonly PropertyKey[]): FoundProblem[] {
  return [
    ...sourceProblems(stream, at),
    ...duplicates(listIn(stream, "features"), "name", [...at, "features"], "another feature"),
    ...duplicates(listIn(stream, "slices"), "key", [...at, "slices"], "another slice"),
    ...pathProblems(stream, at),
    ...horizonProblems(stream, at),
    ...paneProblems(stream, at),
  ];
}

function sourceProblems(stream: unknown, at: readonly PropertyKey[]): FoundProblem[] {
  const source = fieldOf(stream, "source");
  if (!isBlock(source)) return [];
  const given = ["kafka", "file"].filter((kind) => fieldOf(source, kind) !== undefined);
  const path = [...at, "source"];
  if (given.length === 0)
    return [{ path, sentence: "needs one of kafka and file: say where events come from" }];
  if (given.length === 2)
    return [{ path, sentence: "has both kafka and file: keep one, or make two streams" }];
  const eventTime = fieldOf(fieldOf(stream, "payload"), "eventTime");
  if (given[0] === "file" && eventTime === undefined) {
    return [
      {
        path: [...at, "payload"],
        sentence: "needs eventTime: the lines of a file have no time of their own",
      },
    ];
  }
  return [];
}

function horizonProblems(stream: unknown, at: readonly PropertyKey[]): FoundProblem[] {
  const paneMs = parseDuration(fieldOf(stream, "pane") ?? "1m");
  const seen = new Map<number, unknown>();
  return listIn(stream, "horizons").flatMap((horizon, index) => {
    const ms = parseDuration(horizon);
    if (ms === null || paneMs === null || paneMs === 0) return [];
    const path = [...at, "horizons", index];
    if (ms === 0 || ms % paneMs !== 0) {
      const pane = formatDuration(paneMs);
      return [
        {
          path,
          sentence: `${String(horizon)} is not a whole number of panes of ${pane}: give a multiple of ${pane}`,
        },
      ];
    }
    const same = seen.get(ms);
    seen.set(ms, horizon);
    return same === undefined ? [] : [{ path, sentence: `is as long as ${String(same)}: leave one out` }];
  });
}

const HOUR_MS = 3_600_000;

function paneProblems(stream: unknown, at: readonly PropertyKey[]): FoundProblem[] {
  const problems: FoundProblem[] = [];
  const paneMs = parseDuration(fieldOf(stream, "pane"));
  if (paneMs !== null && (paneMs < 1_000 || HOUR_MS % paneMs !== 0)) {
    problems.push({
      path: [...at, "pane"],
      sentence: "must divide an hour and be at least 1s: give 10s, 30s, 1m, 5m or another that does",
    });
  }
  const latenessMs = parseDuration(fieldOf(stream, "lateness"));
  const most = 1_440 * (paneMs ?? 60_000);
  if (latenessMs !== null && latenessMs > most) {
    problems.push({
      path: [...at, "lateness"],
      sentence: `is more than 1,440 panes (${formatDuration(most)}): nothing would be evaluated for that long; give less`,
    });
  }
  return problems;
}

function pathProblems(stream: unknown, at: readonly PropertyKey[]): FoundProblem[] {
  const places: (readonly [readonly PropertyKey[], unknown])[] = [
    [["payload", "eventTime"], fieldOf(fieldOf(stream, "payload"), "eventTime")],
    ...listIn(stream, "features").map((f, i) => [["features", i, "path"], fieldOf(f, "path")] as const),
    ...listIn(stream, "slices").map((s, i) => [["slices", i, "path"], fieldOf(s, "path")] as const),
  ];
  return places
    .filter(([, value]) => typeof value === "string" && value !== "" && parsePath(value) === null)
    .map(([path]) => ({
      path: [...at, ...path],
      sentence:
        'is not a path: join names by single dots (cargo.temp), and quote a name that holds one ("a.b".c)',
    }));
}

function duplicates(
  list: readonly unknown[],
  key: string,
  at: readonly PropertyKey[],
  whose: string,
): FoundProblem[] {
  const seen = new Set<unknown>();
  return list.flatMap((entry, index) => {
    // A slice key may stand alone, without a block around it.
    const value = typeof entry === "string" ? entry : fieldOf(entry, key);
    if (typeof value !== "string") return [];
    const known = seen.has(value);
    seen.add(value);
    const sentence = `${JSON.stringify(value)} is the ${key} of ${whose} too: give each its own`;
    return known ? [{ path: isBlock(entry) ? [...at, index, key] : [...at, index], sentence }] : [];
  });
}

function isBlock(value: unknown): value is Record<string, unknown> {
  return typeof value === "object" && value !== null && !Array.isArray(value);
}

function fieldOf(value: unknown, key: string): unknown {
  return isBlock(value) && Object.hasOwn(value, key) ? value[key] : undefined;
}

function listIn(value: unknown, key: string): readonly unknown[] {
  const list = fieldOf(value, key);
  return Array.isArray(list) ? list : [];
}
