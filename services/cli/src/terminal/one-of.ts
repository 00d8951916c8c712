import { MoorlineError } from "@moorline/errors";

/** The value of an option that takes one of a few words. @throws MOORLINE_INPUT_OPTION */
export function oneOf<const T extends string>(
  command: string,
  option: string,
  value: string,
  words: readonly T[],
): T {
  const found = words.find((word) => word === value);
  if (found !== undefined) return found;
  const wanted = words.length === 1 ? words[0] : `one of ${words.join(", ")}`;
  throw new MoorlineError("MOORLINE_INPUT_OPTION", { command, option, value: JSON.stringify(value), wanted });
}
