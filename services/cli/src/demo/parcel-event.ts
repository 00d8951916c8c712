import { EvenDraws } from "./even-draws.js";
import { SeededRandom } from "./random.js";

/** One invented measurement of a refrigerated parcel, as the spoilage model is fed with it. */
export interface ParcelEvent {
  readonly depot: Depot;
  readonly cargo_temp: number;
  readonly ambient_temp: number;
  readonly humidity: number | null;
  readonly door_openings: number;
  readonly transit_hours: number;
  readonly dwell_minutes: number;
  readonly battery_volts: number;
}

export const DEPOTS = ["north", "south", "east"] as const;
export type Depot = (typeof DEPOTS)[number];

/** The depot whose compressors tire. */
export const TIRING_DEPOT: Depot = "north";
/** Share of the parcels there that get warm once the compressors are tired: eight times those above the training's p99. */
const WARM_SHARE = 0.08;

/** What is drawn for an event, one dimension each. */
const DRAWS = [
  "cargo",
  "ambient",
  "humidity",
  "noHumidity",
  "doors",
  "transit",
  "dwell",
  "battery",
  "isWarm",
  "warm",
] as const;
type Draw = (typeof DRAWS)[number];

/**
 * Invented events by index. Every feature keeps its distribution, so that nothing drifts but what is meant to: with `tiredness`
 * (0 to 1) a growing share of the parcels of one depot is warm.
 */
export class Parcels {
  readonly #seed: number;
  readonly #draws: EvenDraws;

  constructor(seed: number) {
    this.#seed = seed;
    this.#draws = new EvenDraws(seed);
  }

  event(index: number, tiredness: number): ParcelEvent {
    const round = Math.floor(index / DEPOTS.length);
    const order = new SeededRandom(this.#seed, round).permutation(DEPOTS.length);
    const depot = order[index % DEPOTS.length]!;
    const u = (draw: Draw) => this.#draws.draw(DRAWS.indexOf(draw) * DEPOTS.length + depot, round);
    const isWarm = DEPOTS[depot] === TIRING_DEPOT && u("isWarm") < WARM_SHARE * tiredness;
    return {
      depot: DEPOTS[depot]!,
      cargo_temp: rounded(isWarm ? 8 + exponential(u("warm"), 1.4) : gumbel(u("cargo"), 3.8, 0.75), 2),
      ambient_temp: rounded(logistic(u("ambient"), 13, 3.4), 1),
      humidity: u("noHumidity") < 0.01 ? null : rounded(clamp(logistic(u("humidity"), 58, 6.2), 5, 100), 1),
      door_openings: doorOpenings(u("doors")),
      transit_hours: rounded(Math.exp(logistic(u("transit"), 1.9, 0.26)), 2),
      dwell_minutes: rounded(exponential(u("dwell"), 18), 1),
      battery_volts: rounded(3.72 - 0.09 * (-Math.log(u("battery"))) ** 0.6, 3),
    };
  }
}

/** Quantile functions: a uniform draw to a value. */
function gumbel(u: number, mode: number, scale: number): number {
  return mode - scale * Math.log(-Math.log(u));
}

function logistic(u: number, middle: number, scale: number): number {
  return middle + scale * Math.log(u / (1 - u));
}

function exponential(u: number, mean: number): number {
  return -mean * Math.log(1 - u);
}

/** 62 % of the parcels are never opened on the way. */
function doorOpenings(u: number): number {
  return u < 0.62 ? 0 : 1 + Math.floor(exponential((u - 0.62) / 0.38, 1.5));
}

function clamp(value: number, low: number, high: number): number {
  return Math.min(high, Math.max(low, value));
}

function rounded(value: number, digits: number): number {
  return Number(value.toFixed(digits));
}
