// What the coverage of the band is measured on: laws, the change of each, and the truth of the change at a baseline value.

/** mulberry32 with normal draws, both of a Box–Muller pair used. */
export class Draws {
  #state;
  #spare = null;

  constructor(seed) {
    this.#state = seed >>> 0;
  }

  uniform() {
    this.#state = (this.#state + 0x6d2b79f5) >>> 0;
    let t = this.#state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return (((t ^ (t >>> 14)) >>> 0) + 0.5) / 4294967296;
  }

  normal() {
    if (this.#spare !== null) {
      const spare = this.#spare;
      this.#spare = null;
      return spare;
    }
    const radius = Math.sqrt(-2 * Math.log(this.uniform()));
    const angle = 2 * Math.PI * this.uniform();
    this.#spare = radius * Math.sin(angle);
    return radius * Math.cos(angle);
  }

  column(length, draw) {
    const values = new Float64Array(length);
    for (let i = 0; i < length; i += 1) values[i] = draw(this);
    return values;
  }
}

const t3 = (r) => {
  const [a, b, c] = [r.normal(), r.normal(), r.normal()];
  return r.normal() / Math.sqrt((a * a + b * b + c * c) / 3);
};
const linear = (x) => 1.3 * x + 0.2;

const ZEROS = { before: 0.3, after: 0.4 };
const zeroInflated = (share) => (r) => (r.uniform() < share ? 0 : Math.exp(r.normal()));

/**
 * `draw` is the baseline; `changed` production after the change; `truth(x)` the value of the changed law that has the rank of x, which the
 * band at x must hold.
 */
export const CASES = [
  { name: "normal", draw: (r) => r.normal(), changed: (r) => linear(r.normal()), truth: linear },
  {
    name: "lognormal",
    draw: (r) => Math.exp(r.normal()),
    changed: (r) => 1.2 * Math.exp(r.normal()) ** 1.3,
    truth: (x) => 1.2 * Math.max(0, x) ** 1.3,
  },
  { name: "t3", draw: t3, changed: (r) => linear(t3(r)), truth: linear },
  {
    name: "zero-inflated",
    draw: zeroInflated(ZEROS.before),
    changed: zeroInflated(ZEROS.after),
    truth: (x) => quantileAfter(ZEROS.before + (1 - ZEROS.before) * normalCdf(Math.log(Math.max(x, 1e-300)))),
  },
  {
    name: "rounded",
    draw: (r) => Math.round(4 * r.normal()) / 4,
    changed: (r) => linear(Math.round(4 * r.normal()) / 4),
    truth: linear,
  },
];

/** The quantile of the zero-inflated law after its change. */
function quantileAfter(rank) {
  if (rank <= ZEROS.after) return 0;
  const within = (rank - ZEROS.after) / (1 - ZEROS.after);
  let [low, high] = [-9, 9];
  for (let step = 0; step < 60; step += 1) {
    const middle = (low + high) / 2;
    if (normalCdf(middle) < within) low = middle;
    else high = middle;
  }
  return Math.exp((low + high) / 2);
}

/** Φ by its series, and by the continued fraction of Mills' ratio in the tails. */
function normalCdf(z) {
  const size = Math.abs(z);
  const density = Math.exp((-z * z) / 2) / Math.sqrt(2 * Math.PI);
  if (size > 5) {
    let fraction = size;
    for (let k = 40; k >= 1; k -= 1) fraction = size + k / fraction;
    return z > 0 ? 1 - density / fraction : density / fraction;
  }
  let term = size;
  let sum = size;
  for (let k = 1; k < 200; k += 1) {
    term *= (size * size) / (2 * k + 1);
    sum += term;
  }
  return z > 0 ? 0.5 + density * sum : 0.5 - density * sum;
}
