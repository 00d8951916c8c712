const QUOTE = 0x22;
const BACKSLASH = 0x5c;

/**
 * Whether JSON text nests deeper than a limit, without parsing it. Text that is no JSON gets some answer: parsing rejects
 * it afterwards.
 *
 * Cost: two native searches for text with few brackets, which is nearly every event; one pass over the rest.
 */
export function nestsDeeperThan(text: string, limit: number): boolean {
  // Depth cannot pass the number of opening brackets; brackets inside strings only make this check stricter.
  if (text.length <= limit || countUpTo(text, "{", limit + 1) + countUpTo(text, "[", limit + 1) <= limit) {
    return false;
  }
  return scanDepth(text, limit);
}

function countUpTo(text: string, mark: string, most: number): number {
  let count = 0;
  for (let at = text.indexOf(mark); at !== -1 && count < most; at = text.indexOf(mark, at + 1)) count++;
  return count;
}

function scanDepth(text: string, limit: number): boolean {
  let depth = 0;
  let inString = false;

  for (let i = 0; i < text.length; i++) {
    const c = text.charCodeAt(i);
    if (inString) {
      if (c === BACKSLASH) i++;
      else if (c === QUOTE) inString = false;
    } else if (c === QUOTE) inString = true;
    else if (c === 0x7b || c === 0x5b) {
      if (++depth > limit) return true;
    } else if (c === 0x7d || c === 0x5d) depth--;
  }
  return false;
}
