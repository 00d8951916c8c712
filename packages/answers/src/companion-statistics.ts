import {
  type AndersonDarling,
  andersonDarling,
  type ChanceLevel,
  decileBins,
  jensenShannonNoise,
  type NumericSide,
  populationStabilityNoise,
  type RateChange,
  rateChange,
  rateChangePValue,
  TAIL_RANGES,
  type WassersteinChange,
  wassersteinChange,
} from "@moorline/stats";

/** What stands beside a comparison: tests and chance levels that decide nothing. Null where a side has nothing to compute them from. */
export interface CompanionStatistics {
  readonly andersonDarling: AndersonDarling | null;
  /** Over ranks .001 to .05 and .95 to .999: severity of a tail that no single record decides. */
  readonly wassersteinTails: { readonly lower: WassersteinChange; readonly upper: WassersteinChange } | null;
  /** Of `wasserstein.distance`: what chance makes of it, and its 95 % interval where it is more than that. */
  readonly wassersteinNoise: Omit<WassersteinChange, "distance"> | null;
  readonly psiNoise: ChanceLevel | null;
  readonly jensenShannonNoise: ChanceLevel | null;
  readonly missingChange: (RateChange & { readonly pValue: number }) | null;
}

/** The companions of a numeric comparison. */
export function companionStatistics(
  baseline: NumericSide,
  production: NumericSide,
  designEffect: number,
): CompanionStatistics {
  return {
    ...ofValues(baseline, production, designEffect),
    missingChange: missingChangeOf(baseline, production, designEffect),
  };
}

function ofValues(
  { cdf: baseline }: NumericSide,
  { cdf: production }: NumericSide,
  designEffect: number,
): Omit<CompanionStatistics, "missingChange"> {
  if (baseline.n === 0 || production.n === 0) {
    return {
      andersonDarling: null,
      wassersteinNoise: null,
      wassersteinTails: null,
      psiNoise: null,
      jensenShannonNoise: null,
    };
  }
  const level = {
    bins: decileBins(baseline, production).length,
    n: baseline.n,
    m: production.n,
    designEffect,
  };
  const { noise, aboveNoise, interval } = wassersteinChange(baseline, production, { designEffect });
  return {
    andersonDarling: andersonDarling(baseline, production, { designEffect }),
    wassersteinNoise: { noise, aboveNoise, interval },
    wassersteinTails: {
      lower: wassersteinChange(baseline, production, { range: TAIL_RANGES.lower, designEffect }),
      upper: wassersteinChange(baseline, production, { range: TAIL_RANGES.upper, designEffect }),
    },
    psiNoise: populationStabilityNoise(level),
    jensenShannonNoise: jensenShannonNoise(level),
  };
}

function missingChangeOf(
  baseline: NumericSide,
  production: NumericSide,
  designEffect: number,
): CompanionStatistics["missingChange"] {
  if (baseline.events === 0 || production.events === 0) return null;
  const before = { events: baseline.missing, trials: baseline.events };
  const now = { events: production.missing, trials: production.events };
  return {
    ...rateChange(before, now, { designEffect }),
    pValue: rateChangePValue(before, now, designEffect),
  };
}
