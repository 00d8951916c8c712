export type * from "./audit-report.js";
export type * from "./store.js";
