export type * from "./moorline-config.js";
