export { drawMultiplicities } from "./multiplicities";
export { drawRuns } from "./block-multiplicities";
export { readGroup, listPatterns } from "./pattern-lists";
export { sumPatterns, countJointly } from "./joint-counts";
export { correlate, average, addShare, spread, countBelow, sortIntoBins, quantile } from "./replicate-values";
