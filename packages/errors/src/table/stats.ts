import { errorRows } from "../error-row.js";

/** Errors raised by stats. */
export const STATS_ERRORS = errorRows({
  MOORLINE_INPUT_EMPTY_SAMPLE: {
    category: "INPUT",
    template: "{statistic} needs at least one finite value on each side",
    hint: "check that both sides hold finite values, or treat the feature as thin",
  },
  MOORLINE_INPUT_VALUE_NOT_FINITE: {
    category: "INPUT",
    template: "value {index} of the sample is {value}, not a finite number",
    hint: "count missing and non-finite values apart and leave them out of the sample",
  },
  MOORLINE_INPUT_STATISTIC_DOMAIN: {
    category: "INPUT",
    template: "{name} is {value}, outside {domain}",
    hint: "give {name} within {domain}",
  },
});
