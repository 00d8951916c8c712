import { errorRows } from "../error-row.js";

/** Errors raised by the sketch package. */
export const SKETCH_ERRORS = errorRows({
  MOORLINE_INPUT_RANK_RANGE: {
    category: "INPUT",
    template: "rank {rank} is outside 0 to 1",
    hint: "give a rank from 0 (lowest) to 1 (highest)",
  },
  MOORLINE_INPUT_SKETCH_VALUE: {
    category: "INPUT",
    template: "{value} is not a value that can be looked up in a distribution",
    hint: "give a number that is not NaN",
  },
  MOORLINE_INPUT_SKETCH_COMPRESSION: {
    category: "INPUT",
    template: "compression {compression} is outside {least} to {most}",
    hint: "give a whole number in that range; 200 suits windows, 500 suits baselines",
  },
  MOORLINE_INPUT_SKETCH_THRESHOLDS: {
    category: "INPUT",
    template: "the thresholds {values} are not at most {limit} finite ascending values with a short id",
    hint: "freeze the thresholds from a baseline",
  },
  MOORLINE_INPUT_SKETCH_ATOMS: {
    category: "INPUT",
    template: "the known atoms are not at most {limit} finite values",
    hint: "name only the most frequent values",
  },
  MOORLINE_INPUT_SKETCH_COUNT: {
    category: "INPUT",
    template: "count {count} is not a whole number from 0 to {most}",
    hint: "give a whole number in that range",
  },
  MOORLINE_INPUT_SKETCH_CATEGORIES: {
    category: "INPUT",
    template: "{count} is not a number of categories from 1 to {most}",
    hint: "keep fewer categories; the others are counted together",
  },
  MOORLINE_STATE_EMPTY_SKETCH: {
    category: "STATE",
    template: "the sketch holds no finite value",
    hint: "add values first, or treat the feature as thin",
  },
  MOORLINE_FORMAT_SKETCH: {
    category: "FORMAT",
    template: "the bytes are not a sketch: {reason} at byte {offset} of {length}",
    hint: "the bytes were cut, changed or written by something else; take them from a copy, for a sketch is never repaired",
  },
  MOORLINE_FORMAT_SKETCH_VERSION: {
    category: "FORMAT",
    template: "the sketch has format version {version}; this program reads up to {newest}",
    hint: "update the program that reads it",
  },
});
