import { expect } from "vitest";

/** Fails with actual, expected and miss when the two differ by more than `relative` of the expected and by more than `absolute`. */
export function expectClose(
  actual: number,
  expected: number,
  { relative, absolute }: { readonly relative: number; readonly absolute: number },
): void {
  const miss = Math.abs(actual - expected);
  const allowed = Math.max(absolute, relative * Math.abs(expected));
  if (!(miss <= allowed)) {
    expect.fail(`actual ${actual}, expected ${expected}, miss ${miss}, allowed ${allowed}`);
  }
}
