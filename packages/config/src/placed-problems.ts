import { MoorlineError } from "@moorline/errors";
import { type Document, isMap, isNode, isScalar, isSeq, type LineCounter } from "yaml";
import { type ConfigProblem, type FoundProblem, formatKeyPath } from "./config-problem.js";

/** An empty file is an empty block, so that what is missing is named. */
export function contentOf(document: Document.Parsed, file: string): unknown {
  try {
    return document.toJS() ?? {};
  } catch (cause) {
    // Only aliases that multiply without end come here: the parser refuses them.
    throw new MoorlineError("MOORLINE_CONFIG_UNREADABLE", { file, reason: reasonOf(cause) }, { cause });
  }
}

export function syntaxProblems(document: Document.Parsed, lines: LineCounter): ConfigProblem[] {
  return document.errors.map((error) => {
    const { line, col } = lines.linePos(error.pos[0]);
    const sentence = `is not YAML: ${error.message.replace(/\.$/, "")}`;
    return { line, column: col, at: "the file", sentence };
  });
}

export function placed(
  found: readonly FoundProblem[],
  document: Document.Parsed,
  lines: LineCounter,
  from: ReadonlyMap<string, string>,
): ConfigProblem[] {
  const problems = found.map((problem): ConfigProblem => {
    const at = formatKeyPath(problem.path);
    const variable = from.get(at) ?? from.get(formatKeyPath(problem.path.slice(0, -1)));
    if (variable !== undefined) return { line: null, column: null, at: variable, sentence: problem.sentence };
    const { line, col } = lines.linePos(offsetOf(document, problem));
    return { line, column: col, at, sentence: problem.sentence };
  });
  return problems.sort((a, b) => (a.line ?? 0) - (b.line ?? 0) || (a.column ?? 0) - (b.column ?? 0));
}

/** Where the value stands, or its key; for what is missing, the block that should hold it. */
function offsetOf(document: Document.Parsed, { path, onKey }: FoundProblem): number {
  let node: unknown = document.contents;
  let offset = startOf(node) ?? 0;
  for (const [depth, part] of path.entries()) {
    if (isMap(node)) {
      const pair = node.items.find((item) => isScalar(item.key) && String(item.key.value) === String(part));
      const wanted = onKey === true && depth === path.length - 1 ? pair?.key : pair?.value;
      offset = startOf(wanted) ?? startOf(pair?.key) ?? offset;
      node = pair?.value;
    } else if (isSeq(node)) {
      node = node.items[Number(part)];
      offset = startOf(node) ?? offset;
    } else break;
  }
  return offset;
}

function startOf(node: unknown): number | null {
  return isNode(node) && node.range ? node.range[0] : null;
}

export function invalid(file: string, problems: readonly ConfigProblem[]): MoorlineError {
  const count = problems.length === 1 ? "one problem" : `${problems.length} problems`;
  return new MoorlineError("MOORLINE_CONFIG_INVALID", { file, count, problems });
}

export function reasonOf(cause: unknown): string {
  const code = (cause as NodeJS.ErrnoException).code;
  if (code === "ENOENT") return "there is no such file";
  if (code === "EISDIR") return "it is a directory";
  if (code === "EACCES") return "access is denied";
  return cause instanceof Error ? cause.message : String(cause);
}
