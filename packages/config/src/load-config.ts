import { readFileSync } from "node:fs";
import { dirname, resolve } from "node:path";
import { MoorlineError } from "@moorline/errors";
import { type Document, isMap, isNode, isScalar, isSeq, LineCounter, parseDocument } from "yaml";
import { type ConfigProblem, type FoundProblem, formatKeyPath } from "./config-problem.js";
import { crossFieldProblems } from "./cross-field-rules.js";
import { applyEnvOverrides, type Environment } from "./env-overrides.js";
import type { MoorlineConfig } from "./moorline-config.js";
import { resolveConfig } from "./resolve-config.js";
import { CONFIG_SCHEMA } from "./schema.js";
import { shapeProblems } from "./shape-problems.js";

/**
 * Reads and checks a config file.
 *
 * @throws MOORLINE_CONFIG_UNREADABLE when the file cannot be read
 * @throws MOORLINE_CONFIG_INVALID with every problem in `details.problems`
 */
export function loadConfig(file: string, env: Environment = process.env): MoorlineConfig {
  let text: string;
  try {
    text = readFileSync(file, "utf8");
  } catch (cause) {
    throw new MoorlineError("MOORLINE_CONFIG_UNREADABLE", { file, reason: reasonOf(cause) }, { cause });
  }
  return parseConfig(text, { file, folder: dirname(resolve(file)), env });
}

export interface ParseConfigOptions {
  /** What the text is called in problems. Default `moorline.yaml`. */
  readonly file?: string;
  /** Where relative paths start. Default: the current directory. */
  readonly folder?: string;
  readonly env?: Environment;
}

/**
 * Checks the text of a config.
 *
 * @throws MOORLINE_CONFIG_INVALID with every problem in `details.problems`
 */
export function parseConfig(text: string, options: ParseConfigOptions = {}): MoorlineConfig {
  const file = options.file ?? "moorline.yaml";
  const lines = new LineCounter();
  const document = parseDocument(text, { lineCounter: lines, prettyErrors: false, stringKeys: true });
  if (document.errors.length > 0) throw invalid(file, syntaxProblems(document, lines));
  const written = contentOf(document, file);
  const { data, from } = applyEnvOverrides(written, options.env ?? {});
  const checked = CONFIG_SCHEMA.safeParse(data);
  const found = [
    ...(checked.success ? [] : shapeProblems(checked.error.issues, data)),
    ...crossFieldProblems(data),
  ];
  if (!checked.success || found.length > 0) throw invalid(file, placed(found, document, lines, from));
  return resolveConfig(checked.data, resolve(options.folder ?? "."));
}

/** An empty file is an empty block, so that what is missing is named. */
function contentOf(document: Document.Parsed, file: string): unknown {
  try {
    return document.toJS() ?? {};
  } catch (cause) {
    // Only aliases that multiply without end come here: the parser refuses them.
    throw new MoorlineError("MOORLINE_CONFIG_UNREADABLE", { file, reason: reasonOf(cause) }, { cause });
  }
}

function syntaxProblems(document: Document.Parsed, lines: LineCounter): ConfigProblem[] {
  return document.errors.map((error) => {
    const { line, col } = lines.linePos(error.pos[0]);
    const sentence = `is not YAML: ${error.message.replace(/\.$/, "")}`;
    return { line, column: col, at: "the file", sentence };
  });
}

function placed(
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

function invalid(file: string, problems: readonly ConfigProblem[]): MoorlineError {
  const count = problems.length === 1 ? "one problem" : `${problems.length} problems`;
  return new MoorlineError("MOORLINE_CONFIG_INVALID", { file, count, problems });
}

function reasonOf(cause: unknown): string {
  const code = (cause as NodeJS.ErrnoException).code;
  if (code === "ENOENT") return "there is no such file";
  if (code === "EISDIR") return "it is a directory";
  if (code === "EACCES") return "access is denied";
  return cause instanceof Error ? cause.message : String(cause);
}
