export { registerCodecs } from "./kafka/codecs.js";
export { type CollectorOptions, startCollector } from "./start-collector.js";
