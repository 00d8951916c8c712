import { errorRows } from "../error-row.js";

/** Errors raised by the sketch package. */
export const SKETCH_ERRORS = errorRows({
  MOORLINE_INPUT_RANK_RANGE: {
    category: "INPUT",
    template: "rank {rank} is outside 0 to 1",
    hint: "give a rank from 0 (lowest) to 1 (highest)",
  },
  MOORLINE_STATE_EMPTY_SKETCH: {
    category: "STATE",
    template: "the sketch holds no finite value",
    hint: "add values first, or treat the feature as thin",
  },
});
