import { criticalZ, DEFAULT_DECISION_RULE, type DecisionRule } from "@moorline/stats";

export const MINUTE_MS = 60_000;
export const VALUES_A_WINDOW = 1_000;
export const MONTH_DAYS = 30;
/** What the simulations are about: a team with so many features, each decided once a minute. */
export const FEATURES_A_TEAM = 500;

export const RULE_OF_A_TEAM: DecisionRule = Object.freeze({
  ...DEFAULT_DECISION_RULE,
  zPage: criticalZ(FEATURES_A_TEAM * MONTH_DAYS * 1_440),
});
