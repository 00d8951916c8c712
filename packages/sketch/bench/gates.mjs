// The gates and targets: each a figure that must be at least or at most a number.

const of = (figures, name) => figures.accuracy.filter((row) => row.kind === name);
const worst = (rows, level, field) => Math.max(...rows.map((row) => row[level][field]));

/** [what, how to read the figure, "atLeast" | "atMost", gate, target] */
function addGates(add, java) {
  const rows = [];
  for (const [name, f] of Object.entries(add)) {
    const atoms = name === "70 % zeros";
    if (java) {
      const vsJava = (nanos) => [f.javaMergingDigest / nanos, "atLeast", 4];
      rows.push([`add vs Java, ${name}`, ...vsJava(f.column), 6]);
      rows.push([`add vs Java, were the flush 2048, ${name}`, ...vsJava(f.columnFlush2048), 6]);
      rows.push([`add vs Java, were the flush 1024, ${name}`, ...vsJava(f.columnFlush1024), 4]);
    }
    rows.push([`add vs npm tdigest, ${name}`, f.npmTdigest / f.column, "atLeast", atoms ? 12 : 20, 30]);
    const [gate, target] = atoms ? [0.55, 0.4] : [0.4, 0.25];
    rows.push([
      `add / TypedArray.sort of 1024, ${name}`,
      f.column / f.typedArraySort1024,
      "atMost",
      gate,
      target,
    ]);
    rows.push([`add / own sort floor, ${name}`, f.column / f.sortFloor4096, "atMost", 2.2, 1.5]);
    rows.push([`add(value) / add(column), ${name}`, f.value / f.column, "atMost", 1.6, 1.3]);
  }
  return rows;
}

function mergeGates(merge, java) {
  const rows = [["k-way merge, µs a sketch", merge.kWayUs, "atMost", 5, 5]];
  if (java) {
    rows.push([
      "merge, k-way vs Java's fold that puts work off",
      merge.javaLazyFoldUs / merge.kWayUs,
      "atLeast",
      1,
      1,
    ]);
    rows.push([
      "merge, pairwise vs Java, each step readable",
      merge.javaPairwiseUs / merge.pairwiseUs,
      "atLeast",
      2.5,
      2.5,
    ]);
    rows.push(["quantile / Java", merge.quantileNs / merge.javaQuantileNs, "atMost", 0.5, 0.5]);
  }
  return rows;
}

function accuracyGates(figures, java) {
  const iid = of(figures, "iid");
  const rows = [];
  for (const level of ["live", "sealed"]) {
    const clusters = worst(iid, level, "clusters");
    rows.push([
      `sup rank error, iid, ${level} (≤ ${clusters} clusters)`,
      worst(iid, level, "supStrict"),
      "atMost",
      1e-3,
      5e-4,
    ]);
    const moving = [...of(figures, "order"), ...of(figures, "merge")];
    rows.push([
      `sup rank error, diurnal and 1,440-way merge, ${level}`,
      worst(moving, level, "supStrict"),
      "atMost",
      1e-3,
      5e-4,
    ]);
    rows.push([`few distinct, ${level}`, worst(of(figures, "distinct"), level, "supStrict"), "atMost", 0, 0]);
    rows.push([
      `70 % zeros, ${level}`,
      worst(of(figures, "zeros"), level, "supStrict"),
      "atMost",
      5e-3,
      1e-3,
    ]);
    rows.push([
      `two far modes, ${level} (no gate given: the one of iid)`,
      worst(of(figures, "far"), level, "supStrict"),
      "atMost",
      1e-3,
      5e-4,
    ]);
    rows.push([
      `relative rank error at .001/.999, iid, ${level}`,
      worst(iid, level, "tail999"),
      "atMost",
      0.05,
      0.02,
    ]);
    rows.push([
      `relative rank error at .0001/.9999, iid, ${level}`,
      worst(iid, level, "tail9999"),
      "atMost",
      0.12,
      0.04,
    ]);
  }
  if (java) {
    for (const row of iid) {
      rows.push([
        `sup over 199 quantiles / Java live, ${row.name}, sealed`,
        row.sealed.sup / row.javaMergingDigest.sup,
        "atMost",
        1,
        1,
      ]);
    }
  }
  return rows;
}

export function judge(figures, java) {
  const rows = [
    ...addGates(figures.add, java),
    ...mergeGates(figures.merge, java),
    ...accuracyGates(figures, java),
  ];
  return rows.map(([what, value, direction, gate, target]) => {
    const meets = (bound) => (direction === "atLeast" ? value >= bound : value <= bound);
    return {
      what,
      value: Number(value.toPrecision(3)),
      [direction]: gate,
      target,
      gate: meets(gate) ? "met" : "missed",
      targetMet: meets(target),
    };
  });
}
