export {
  DEAD_LETTER_REASONS,
  type DeadLetterReason,
  type DecodedEvent,
  type DecodeResult,
  type Decoder,
} from "./decoder.js";
export { EARLIEST_EVENT_MS } from "./event-time.js";
export {
  createJsonDecoder,
  DEFAULT_MAX_BYTES,
  DEFAULT_MAX_DEPTH,
  type JsonDecoderLimits,
} from "./json-decoder.js";
export { NO_SLICE_VALUE, STRUCTURED_SLICE_VALUE } from "./slice-text.js";
