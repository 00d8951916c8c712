import { readFileSync } from "node:fs";
import { dirname, resolve } from "node:path";
import { MoorlineError } from "@moorline/errors";
import { LineCounter, parseDocument } from "yaml";
import { crossFieldProblems } from "./cross-field-rules.js";
import { applyEnvOverrides, type Environment } from "./env-overrides.js";
import type { MoorlineConfig } from "./moorline-config.js";
import { contentOf, invalid, placed, reasonOf, syntaxProblems } from "./placed-problems.js";
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
