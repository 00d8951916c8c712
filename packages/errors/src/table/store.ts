import { errorRows } from "../error-row.js";

/** Errors raised by the store package. */
export const STORE_ERRORS = errorRows({
  MOORLINE_UPSTREAM_STORE_AWAY: {
    category: "UPSTREAM",
    template: "the store does not answer: {reason}",
    hint: "check that the database server runs and that the store address in the config is right",
    retryable: true,
  },
  MOORLINE_UPSTREAM_STORE_BUSY: {
    category: "UPSTREAM",
    template: "the store is locked by another writer: {reason}",
    hint: "wait; when it stays so, look for a process that holds the database file or a long transaction",
    retryable: true,
  },
  MOORLINE_UPSTREAM_STORE_FULL: {
    category: "UPSTREAM",
    template: "the store cannot write: {reason}",
    hint: "free disk space where the store lives; nothing is lost, reading waits until writing works again",
    retryable: true,
  },
  MOORLINE_UPSTREAM_STORE_REFUSED: {
    category: "UPSTREAM",
    template: "the store refused: {reason}",
    hint: "check the rights of the store's user or file, and that no other program changed its tables",
  },
  MOORLINE_FORMAT_STORE_FILE: {
    category: "FORMAT",
    template: "the store file cannot be read: {reason}",
    hint: "it is no SQLite file or it is damaged: check the path in the config, or restore the file from a copy",
  },
  MOORLINE_STATE_STORE_NEWER: {
    category: "STATE",
    template: "the store has schema version {found}, this Moorline knows up to {known}",
    hint: "run the Moorline version that wrote the store, or a newer one",
  },
  MOORLINE_STATE_STORE_CLOSED: {
    category: "STATE",
    template: "the store was closed: {reason}",
    hint: "this is a fault of the caller: nothing may be asked of a store after it was closed",
  },
  MOORLINE_STATE_UNKNOWN_BASELINE: {
    category: "STATE",
    template: "stream {stream} has no baseline {id}",
    hint: "list the baselines with 'moorline baseline list --stream {stream}'",
  },
  MOORLINE_INPUT_CHECKPOINT: {
    category: "INPUT",
    template: "checkpoint of {partition} cannot be written: {reason}",
    hint: "this is a fault of the caller: offsets must ascend and counts must add up",
  },
  MOORLINE_INPUT_STORE_NAME: {
    category: "INPUT",
    template:
      "names of {bytes} bytes together are too long to be stored, {most} are the most; the longest begins with {start}",
    hint: "shorten the stream, topic, slice or feature name",
  },
  MOORLINE_INPUT_SEGMENT_BODY: {
    category: "INPUT",
    template: "a segment cannot be encoded: {reason}",
    hint: "give each feature once, with a name of at most 65,535 bytes",
  },
  MOORLINE_FORMAT_SEGMENT_BODY: {
    category: "FORMAT",
    template: "segment bytes cannot be read at {offset} of {length}: {reason}",
    hint: "run 'moorline audit' to see which segment is damaged; restore the store from a copy",
  },
});
