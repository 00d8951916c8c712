import { MoorlineError } from "@moorline/errors";

/** The parts that `run` composes, in the order in which they start; they stop the other way round. */
export const PARTS = ["gateway", "evaluator", "collector"] as const;
export type Part = (typeof PARTS)[number];

/** `--only collector,evaluator` as parts. @throws MOORLINE_INPUT_OPTION */
export function parseParts(only: string | undefined): readonly Part[] {
  if (only === undefined) return PARTS;
  const names = only.split(",").map((name) => name.trim());
  const unknown = names.find((name) => !PARTS.some((part) => part === name));
  if (unknown !== undefined) {
    const wanted = `a list of ${PARTS.join(", ")}`;
    throw new MoorlineError("MOORLINE_INPUT_OPTION", {
      command: "run",
      option: "--only",
      value: only,
      wanted,
    });
  }
  return PARTS.filter((part) => names.includes(part));
}
