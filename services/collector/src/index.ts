export { type CollectorOptions, startCollector } from "./start-collector.js";
