import { errorRows } from "../error-row.js";

/** Errors raised by baseline. */
export const BASELINE_ERRORS = errorRows({
  MOORLINE_INPUT_FILES_NONE: {
    category: "INPUT",
    template: "no file matches {pattern}",
    hint: "give the path of a CSV, TSV, Parquet or NDJSON file, or a pattern such as 'train/*.parquet' in quotes",
  },
  MOORLINE_INPUT_FILE_FORMAT: {
    category: "INPUT",
    template: "{file} has no known format",
    hint: "use the ending .csv, .tsv, .parquet, .ndjson, .jsonl or .json, the text ones also with .gz",
  },
  MOORLINE_INPUT_FILE_REMOTE: {
    category: "INPUT",
    template: "{file} is a remote address",
    hint: "copy it to this machine first and give the local path",
  },
  MOORLINE_INPUT_FILE_UNREADABLE: {
    category: "INPUT",
    template: "{file} cannot be read: {reason}",
    hint: "check that the file is whole and that its ending names its format",
  },
  MOORLINE_INPUT_FILE_COLUMNS: {
    category: "INPUT",
    template: "{file} has no column for {missing}; its columns are {columns}",
    hint: "name columns like the features or by the last part of their paths, or give --time-column an existing column",
  },
  MOORLINE_INPUT_FILE_NOT_NUMBERS: {
    category: "INPUT",
    template: "column {column} of {file} is no number in {count} of its values, such as {example}",
    hint: "make them numbers, or leave them empty where there is no value",
  },
  MOORLINE_INPUT_BASELINE_EMPTY: {
    category: "INPUT",
    template: "{source} holds no value of {features}",
    hint: "take data in which each of these features has values, or leave the feature out of the config",
  },
  MOORLINE_INPUT_COMPARE_NO_FEATURES: {
    category: "INPUT",
    template: "{baseline} and {production} share no column of numbers or of text",
    hint: "name the same columns in both files, or say which with --feature",
  },
  MOORLINE_INPUT_WINDOWS_NONE: {
    category: "INPUT",
    template: "the store has no window of stream {stream} from {from} to {to}",
    hint: "give a range for which windows are stored: moorline audit says what there is",
  },
  MOORLINE_STATE_BASELINE_UNKNOWN: {
    category: "STATE",
    template: "there is no baseline {id}",
    hint: "moorline baseline list shows what is stored",
  },
  MOORLINE_STATE_BASELINE_AMBIGUOUS: {
    category: "STATE",
    template: "{id} is the start of more than one baseline: {matches}",
    hint: "give more of the id",
  },
  MOORLINE_STATE_BASELINE_NOT_ACTIVE: {
    category: "STATE",
    template: "stream {stream} has no active baseline",
    hint: "set one: moorline baseline set --stream {stream} --from FILE --activate",
  },
  MOORLINE_STATE_BASELINE_PART: {
    category: "STATE",
    template: "baseline {id} holds nothing of feature {feature}",
    hint: "set a new baseline from data that has this feature",
  },
  MOORLINE_FORMAT_BASELINE_MANIFEST: {
    category: "FORMAT",
    template: "the manifest of baseline {id} has format {format}, which this program does not read",
    hint: "update the program that reads it, or set the baseline again",
  },
  MOORLINE_FORMAT_BLOCK_COUNTS: {
    category: "FORMAT",
    template: "the block counts of a baseline cannot be read: {reason}",
    hint: "set the baseline anew from its source; if the store's file was damaged, restore it first",
  },
});
