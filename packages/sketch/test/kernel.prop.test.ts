import { execFileSync } from "node:child_process";
import { fileURLToPath } from "node:url";
import fc from "fast-check";
import { beforeAll, describe, expect, it } from "vitest";
import { NumericSketch } from "../src/index.js";
import { withKernel } from "../src/kernel/active-kernel.js";
import type { Kernel } from "../src/kernel/kernel.js";
import { TypescriptKernel } from "../src/kernel/typescript-kernel.js";
import { loadWasmKernel, type WasmKernel } from "../src/kernel/wasm-kernel.js";
import { SAMPLES, sampleOf } from "./support/samples.js";

const SEED = 754;
const plain = new TypescriptKernel();
let wasm: WasmKernel;

beforeAll(() => {
  execFileSync(process.execPath, [fileURLToPath(new URL("../scripts/build-kernel.mjs", import.meta.url))]);
  const loaded = loadWasmKernel();
  if (loaded === null) throw new Error("the WebAssembly kernel does not load");
  wasm = loaded;
});

function bothKernels<T>(work: () => T): [T, T] {
  return [withKernel(wasm, work), withKernel(plain, work)];
}

describe("both kernels give the same bytes", () => {
  it.each(Object.keys(SAMPLES))(
    "on %s: a column, single values, and merges two at a time and all at once",
    (name) => {
      const sample = sampleOf(name, 30_000, 11);
      const [a, b] = bothKernels(() => {
        const parts = Array.from({ length: 20 }, (_, i) => {
          const part = new NumericSketch();
          part.addColumn(sample.subarray(i * 1_500, (i + 1) * 1_500));
          return part;
        });
        const whole = new NumericSketch();
        for (const value of sample) whole.add(value);
        const decoded = parts.map((part) => NumericSketch.decode(part.encode()));
        const pair = NumericSketch.merge(parts.slice(0, 2));
        return [whole, NumericSketch.merge(parts), NumericSketch.merge(decoded), pair].map((s) => s.encode());
      });
      expect(a).toEqual(b);
    },
  );

  it("on any values, also non-finite ones, in any number", () => {
    const value = fc.oneof(fc.double(), fc.constantFrom(0, -0, 1, Number.NaN, Number.MAX_VALUE, 5e-324));
    const options = { minLength: 0, maxLength: 6_000, size: "max" } as const;
    fc.assert(
      fc.property(fc.array(value, options), (sample) => {
        const [a, b] = bothKernels(() => {
          const sketch = new NumericSketch({ compression: 100 });
          sketch.addColumn(Float64Array.from(sample));
          return sketch.encode();
        });
        expect(a).toEqual(b);
      }),
      { seed: SEED, numRuns: 25 },
    );
  });
});

describe.each(["wasm", "typescript"] as const)("sortValues(count) of the %s kernel", (name) => {
  const kernel = (): Kernel => (name === "wasm" ? wasm : plain);

  function sorted(values: Float64Array): Float64Array | null {
    kernel().reserve(values.length, 0);
    kernel().values.set(values);
    return kernel().sortValues(values.length) ? kernel().values.slice(0, values.length) : null;
  }

  it.each(Object.keys(SAMPLES))(
    "sorts %s as TypedArray.sort does, whatever the number of values",
    (sample) => {
      for (const n of [0, 1, 2, 39, 41, 500, 2_048, 20_000]) {
        const values = sampleOf(sample, n, 2);
        expect(sorted(values)).toEqual(values.map((v) => v + 0).sort());
      }
    },
  );

  it.each([
    ["1e-3 apart at 1e15", (i: number) => 1e15 + ((i * 7919) % 1000) / 1000],
    ["clusters a few bits wide, far apart", (i: number) => [-1e300, 0, 1, 1e300][i % 4]! + ((i * 31) % 97)],
    ["subnormals", (i: number) => ((i * 7919) % 1009) * 5e-324],
  ])("sorts values %s", (_, draw) => {
    const values = Float64Array.from({ length: 3_000 }, (_unused, i) => draw(i));
    expect(sorted(values)).toEqual(values.slice().sort());
  });

  it.each([Number.NaN, Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY])(
    "says no when a value is %s",
    (odd) => {
      for (const n of [1, 30, 2_048]) {
        const values = sampleOf("normal", n, 2);
        values[n >> 1] = odd;
        expect(sorted(values)).toBeNull();
      }
    },
  );
});

describe.each(["wasm", "typescript"] as const)("sortEntries(count) of the %s kernel", (name) => {
  const kernel = (): Kernel => (name === "wasm" ? wasm : plain);

  it.each([1, 2, 5, 16, 17, 400])(
    "sorts %i ascending lists by mean, equal means in the order given",
    (lists) => {
      const parts = Array.from({ length: lists }, (_, i) =>
        sampleOf(i % 2 ? "two far modes" : "10 distinct", 50, i + 1).sort(),
      );
      const means = parts.flatMap((part) => [...part]);
      const order = means.map((mean, i) => ({ mean, i })).sort((a, b) => a.mean - b.mean || a.i - b.i);
      kernel().reserve(0, means.length);
      kernel().means.set(means);
      kernel().weights.set(means.map((_, i) => i));
      kernel().sortEntries(means.length);
      expect([...kernel().means.subarray(0, means.length)]).toEqual(order.map(({ mean }) => mean));
      expect([...kernel().weights.subarray(0, means.length)]).toEqual(order.map(({ i }) => i));
    },
  );
});
