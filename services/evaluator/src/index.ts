export { type EvaluatorOptions, startEvaluator } from "./start-evaluator.js";
