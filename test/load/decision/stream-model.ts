import { FastRandom } from "./fast-random.js";

/** Values of one simulated feature, window by window; in standard deviations of the undisturbed values. */
export interface StreamModel {
  readonly name: string;
  /** Minutes of the baseline. */
  readonly baselineMinutes: number;
  readonly describe: string;
  /** A source of windows of one feature. */
  start(seed: number): WindowSource;
}

export interface WindowSource {
  /** Fills a column with the values of the next minute. */
  next(column: Float64Array): void;
}

const DAY = 1_440;

export const IID: StreamModel = {
  name: "iid",
  baselineMinutes: 1_000,
  describe: "independent standard normal values; baseline 1,000 minutes",
  start: (seed) => {
    const random = new FastRandom(seed);
    return { next: (column) => random.fillNormal(column) };
  },
};

export function autoregressive(phi: number, baselineMinutes = 1_000, name = "ar"): StreamModel {
  return {
    name,
    baselineMinutes,
    describe: `Gaussian AR(1), phi = ${phi}, inside and across windows; baseline ${baselineMinutes.toLocaleString("en-US")} minutes`,
    start: (seed) => {
      const random = new FastRandom(seed);
      const scale = Math.sqrt(1 - phi * phi);
      let last = random.normal();
      return {
        next: (column) => {
          random.fillNormal(column);
          for (let i = 0; i < column.length; i += 1) {
            last = phi * last + scale * column[i]!;
            column[i] = last;
          }
        },
      };
    },
  };
}

/** A level that moves with the minute: normal values around it. */
function aroundLevel(
  name: string,
  baselineMinutes: number,
  describe: string,
  levels: (random: FastRandom) => (minute: number) => number,
): StreamModel {
  return {
    name,
    baselineMinutes,
    describe,
    start: (seed) => {
      const random = new FastRandom(seed);
      const levelAt = levels(new FastRandom(seed ^ 0x5bd1e995));
      let minute = 0;
      return {
        next: (column) => {
          random.fillNormal(column);
          const level = levelAt(minute);
          minute += 1;
          for (let i = 0; i < column.length; i += 1) column[i]! += level;
        },
      };
    },
  };
}

export const SEASONAL = aroundLevel(
  "seasonal",
  14 * DAY,
  "daily sine of half a standard deviation, whose amplitude varies by 10 % and whose level by .03 sd from day to day; baseline 14 days",
  (random) => {
    let day = -1;
    let amplitude = 0;
    let level = 0;
    return (minute) => {
      if (Math.floor(minute / DAY) !== day) {
        day = Math.floor(minute / DAY);
        amplitude = 0.5 * (1 + 0.1 * random.normal());
        level = 0.03 * random.normal();
      }
      return level + amplitude * Math.sin((2 * Math.PI * minute) / DAY);
    };
  },
);

/** The daily cycle without any difference between days. */
export const STEADY_SEASONAL = aroundLevel(
  "seasonal, equal days",
  14 * DAY,
  "daily sine of half a standard deviation, every day the same; baseline 14 days",
  () => (minute) => 0.5 * Math.sin((2 * Math.PI * minute) / DAY),
);

/** Long quiet stretches and short bursts at another level. */
export const BURSTS = aroundLevel(
  "bursts",
  7 * DAY,
  "a regime that switches: stretches of 4 hours on average at 0, bursts of 20 minutes on average at + 1 sd, both exponential; baseline 7 days",
  (random) => {
    let until = 0;
    let isBurst = true;
    return (minute) => {
      while (minute >= until) {
        isBurst = !isBurst;
        until += Math.max(1, Math.round(-Math.log(random.uniform()) * (isBurst ? 20 : 240)));
      }
      return isBurst ? 1 : 0;
    };
  },
);

export const WEEKLY = aroundLevel(
  "weekly",
  28 * DAY,
  "a daily sine of half a standard deviation, and Saturdays and Sundays .4 sd lower; baseline 28 days",
  () => (minute) => {
    const isWeekend = Math.floor(minute / DAY) % 7 >= 5;
    return 0.5 * Math.sin((2 * Math.PI * minute) / DAY) - (isWeekend ? 0.4 : 0);
  },
);
