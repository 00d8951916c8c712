import { errorRows } from "../error-row.js";

/** Errors raised by collector. */
export const COLLECTOR_ERRORS = errorRows({
  MOORLINE_INPUT_COLLECTOR_STREAM: {
    category: "INPUT",
    template: "there is no stream {stream} in the config, which has {streams}",
    hint: "name one of the config's streams",
  },
  MOORLINE_UPSTREAM_DEAD_LETTERS: {
    category: "UPSTREAM",
    template: "dead letters cannot be written to {target}: {reason}",
    hint: "make {target} writable for the collector, or set it to null to count undecodable events without keeping a copy",
    retryable: true,
  },
  MOORLINE_UPSTREAM_FILE_SOURCE: {
    category: "UPSTREAM",
    template: "the source file {path} cannot be read: {reason}",
    hint: "check that the file is there and readable for the collector",
    retryable: true,
  },
  MOORLINE_UPSTREAM_KAFKA: {
    category: "UPSTREAM",
    template: "Kafka at {brokers} does not serve {topics}: {reason}",
    hint: "check that the brokers are up and reachable from here and that the topics exist",
    retryable: true,
  },
  MOORLINE_FORMAT_COMPRESSED_BATCH: {
    category: "FORMAT",
    template: "a {codec} batch cannot be decompressed: {reason}",
    hint: "the batch was damaged or made by a program that frames {codec} in another way; read the topic past it with the operator's consent",
  },
});
