/** Stands wherever a person might read more into a figure than is in it. */
export const CAUTION =
  "Drift is not proof of harm, and no drift is not proof of safety. Extreme values can identify a person. Follow your review practice and local rules before acting on a model.";
