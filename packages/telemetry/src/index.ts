export type * from "./running-service.js";
