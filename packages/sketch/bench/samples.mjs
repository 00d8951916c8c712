// Seeded samples for the measurements and the accuracy table.

/** mulberry32. */
export function randomOf(seed) {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32;
  };
}

function normal(random) {
  return Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(2 * Math.PI * random());
}

export const DRAWS = {
  uniform: (random) => random(),
  normal: (random) => normal(random),
  lognormal: (random) => Math.exp(normal(random)),
  pareto: (random) => (1 - random()) ** (-1 / 1.5),
  sorted: (_, i) => i,
  reversed: (_, i) => -i,
  "70 % zeros": (random) => (random() < 0.7 ? 0 : Math.exp(normal(random))),
  "10 distinct": (random) => Math.floor(random() * 10),
  "rounded to 0.01": (random) => Math.round(300 * normal(random)) / 100,
  "2 % atom": (random) => (random() < 0.02 ? 0.5 : normal(random)),
  diurnal: (random, i, n) => Math.exp(0.5 * normal(random) + Math.sin((4 * Math.PI * i) / n)),
  step: (random, i, n) => normal(random) + (i > n / 2 ? 1 : 0),
  expanding: (random, i, n) => normal(random) * (1 + (9 * i) / n),
  "two far modes": (random) => normal(random) + (random() < 0.5 ? 0 : 1e9),
  "±MAX_VALUE": (random) => (2 * random() - 1) * Number.MAX_VALUE,
};

export function sampleOf(name, n, seed) {
  const draw = DRAWS[name];
  const random = randomOf(seed);
  return Float64Array.from({ length: n }, (_, i) => draw(random, i, n));
}

export function median(values) {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2;
}
