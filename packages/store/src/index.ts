export type * from "./audit-report.js";
export { openStore, type StoreAddress } from "./open-store.js";
export { decodeSegmentBody, encodeSegmentBody } from "./segment-body.js";
export type * from "./store.js";
