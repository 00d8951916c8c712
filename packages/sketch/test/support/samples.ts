import { normalOf, randomOf } from "./random.js";

type Draw = (random: () => number, i: number, n: number) => number;

/** The distributions and orders that a sketch is held to. */
export const SAMPLES: Readonly<Record<string, Draw>> = {
  uniform: (random) => random(),
  normal: (random) => normalOf(random),
  lognormal: (random) => Math.exp(normalOf(random)),
  pareto: (random) => (1 - random()) ** (-1 / 1.5),
  sorted: (_, i) => i,
  reversed: (_, i) => -i,
  "70 % zeros": (random) => (random() < 0.7 ? 0 : Math.exp(normalOf(random))),
  "10 distinct": (random) => Math.floor(random() * 10),
  "rounded to 0.01": (random) => Math.round(300 * normalOf(random)) / 100,
  "an atom of 2 % in the middle": (random) => (random() < 0.02 ? 0.5 : normalOf(random)),
  diurnal: (random, i, n) => Math.exp(0.5 * normalOf(random) + Math.sin((4 * Math.PI * i) / n)),
  "a step": (random, i, n) => normalOf(random) + (i > n / 2 ? 1 : 0),
  expanding: (random, i, n) => normalOf(random) * (1 + (9 * i) / n),
  "two far modes": (random) => normalOf(random) + (random() < 0.5 ? 0 : 1e9),
  "up to ±MAX_VALUE": (random) => (2 * random() - 1) * Number.MAX_VALUE,
};

export function sampleOf(name: string, n: number, seed: number): Float64Array {
  const draw = SAMPLES[name];
  if (draw === undefined) throw new Error(`no sample is named ${name}`);
  const random = randomOf(seed);
  return Float64Array.from({ length: n }, (_, i) => draw(random, i, n));
}
