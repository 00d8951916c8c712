import { describe, expect, it } from "vitest";
import { ReadReach } from "../../src/kafka/read-reach.js";

describe("ReadReach", () => {
  it("beginOf() follows batches that held nothing for the handler", () => {
    const reach = new ReadReach();
    reach.set("t", 0, 100);
    reach.passOver("t", 0, 151);
    reach.passOver("t", 0, 221);

    expect(reach.beginOf("t", 0, 221)).toBe(100);
  });

  it("beginOf() leaves any other jump as it is, for the guard to judge", () => {
    const reach = new ReadReach();
    reach.set("t", 0, 100);
    reach.passOver("t", 0, 151);

    expect(reach.beginOf("t", 0, 300)).toBe(300);
    expect(reach.beginOf("t", 0, 0)).toBe(0);
    expect(reach.beginOf("t", 1, 151)).toBe(151);
  });

  it("beginOf() knows nothing of what was before a new assignment", () => {
    const reach = new ReadReach();
    reach.set("t", 0, 100);
    reach.clear();
    reach.passOver("t", 0, 151);

    expect(reach.beginOf("t", 0, 151)).toBe(151);
  });
});
