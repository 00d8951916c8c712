/** One thing that is wrong with a config, where, and what to do. */
export interface ConfigProblem {
  /** Counted from 1; null for a problem of an environment variable. */
  readonly line: number | null;
  readonly column: number | null;
  /** For example `streams[0].features[2].path`. */
  readonly at: string;
  /** What is wrong and what to do, without a full stop. */
  readonly sentence: string;
}

/** A problem before its place in the text is known. */
export interface FoundProblem {
  readonly path: readonly PropertyKey[];
  readonly sentence: string;
  /** True where the key itself is wrong, not its value. */
  readonly onKey?: boolean;
}

/** `streams[0].features[2].path`; the root is `the file`. */
export function formatKeyPath(path: readonly PropertyKey[]): string {
  let text = "";
  for (const part of path) {
    if (typeof part === "number") text += `[${part}]`;
    else text += text === "" ? String(part) : `.${String(part)}`;
  }
  return text === "" ? "the file" : text;
}

/** One line a problem: `moorline.yaml:12:7 streams[0].lateness: …`. */
export function formatProblem(file: string, problem: ConfigProblem): string {
  const place = problem.line === null ? "environment" : `${file}:${problem.line}:${problem.column}`;
  return `${place} ${problem.at}: ${problem.sentence}`;
}
