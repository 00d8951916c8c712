import {
  autoregressive,
  BURSTS,
  IID,
  SEASONAL,
  STEADY_SEASONAL,
  type StreamModel,
  WEEKLY,
} from "./stream-model.js";

/** Every simulated stream by name. */
export const MODELS: readonly StreamModel[] = [
  IID,
  autoregressive(0.9),
  autoregressive(0.9, 7 * 1_440, "ar, 7 days"),
  SEASONAL,
  STEADY_SEASONAL,
  BURSTS,
  WEEKLY,
];

export function modelOf(name: string): StreamModel {
  const found = MODELS.find((model) => model.name === name);
  if (found === undefined) throw new Error(`no simulated stream is called ${name}`);
  return found;
}
