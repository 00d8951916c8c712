export type * from "./audit-report.js";
export { openStore, type StoreAddress, type StoreOptions } from "./open-store.js";
export { decodeSegmentBody, encodeSegmentBody } from "./segment-body.js";
export type * from "./store.js";
