export { prometheusRules } from "./prometheus-rules.js";
export { type EvaluatorOptions, startEvaluator } from "./start-evaluator.js";
