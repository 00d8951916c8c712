export * from "./decoder.js";
