import { describe, expect, it } from "vitest";
import { SliceRegistry } from "../src/slice-registry.js";

describe("SliceRegistry", () => {
  it("admit() gives the first values of a key a slice and counts the rest under other, told once a key", () => {
    const told: string[] = [];
    const registry = new SliceRegistry(["depot", "lane"], 2, [], (key) => told.push(key));

    expect(["a", "b", "c", "a", "d"].map((value) => registry.admit(0, value))).toEqual([
      "a",
      "b",
      "other",
      "a",
      "other",
    ]);
    expect(registry.admit(1, "c")).toBe("c");
    expect(told).toEqual(["depot"]);
  });

  it("admit() knows the values of earlier runs before new ones", () => {
    const registry = new SliceRegistry(
      ["depot"],
      2,
      ["all", "depot=x=1", "depot=other", "depot=y", "depotx=z"],
      () => {},
    );

    expect(registry.admit(0, "x=1")).toBe("x=1");
    expect(registry.admit(0, "y")).toBe("y");
    expect(registry.admit(0, "z")).toBe("other");
  });

  it("admit() counts a value that is called other with the rest, without using up the limit", () => {
    const registry = new SliceRegistry(["depot"], 1, [], () => {});

    expect(registry.admit(0, "other")).toBe("other");
    expect(registry.admit(0, "a")).toBe("a");
  });
});
