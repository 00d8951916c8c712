import { errorRows } from "../error-row.js";

/** Errors raised by the gateway. */
export const GATEWAY_ERRORS = errorRows({
  MOORLINE_STATE_UNKNOWN_STREAM: {
    category: "STATE",
    template: "there is no stream {stream}",
    hint: "GET /v1/streams lists the streams",
  },
  MOORLINE_STATE_UNKNOWN_FEATURE: {
    category: "STATE",
    template: "stream {stream} has no feature {feature}",
    hint: "GET /v1/streams/{stream}/features lists its features",
  },
  MOORLINE_INPUT_QUERY: {
    category: "INPUT",
    template: "the request cannot be understood: {reason}",
    hint: "/v1/openapi.json says what each request may carry",
  },
});
