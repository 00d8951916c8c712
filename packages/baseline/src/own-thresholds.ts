/** Id of the thresholds inside a baseline's parts: the id of the baseline is the hash of its parts, so it is not known before them. */
export const OWN_THRESHOLDS = "own";
