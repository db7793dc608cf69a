import type { SingleReason } from "@/lib/science/detection/poisson-mixture";

/** What a reader of a detection must know about one site. */
export type DetectionWarningCode =
  | SingleReason
  | "inseparable"
  | "components-overlap"
  | "correction-refused"
  | "rare-component"
  | "leakage-unseen"
  | "leakage-direction"
  | "threshold-borrowed"
  | "threshold-above-all"
  | "rates-unknown"
  | "few-calibration-shots"
  | "always-dark"
  | "always-bright";

export interface DetectionWarning {
  code: DetectionWarningCode;
  /** One plain sentence. */
  message: string;
}

const MESSAGES: Record<DetectionWarningCode, string> = {
  "no-shots": "The site has no kept shots, so nothing can be fitted.",
  "all-zero": "The site counts zero in every shot: it may be empty, or the detector blind there.",
  "all-equal": "The site has the same count in every shot, so no two states can be told apart.",
  "one-component":
    "The counts are described by one Poisson component alone; which state it is, and the rate of the other, cannot be told.",
  inseparable:
    "Two components fit the counts, but no threshold separates them well enough for a readout correction (1 − ε_d − ε_b ≤ 0.2).",
  "components-overlap": "Dark and bright counts overlap: the mean readout error is above 10 %.",
  "correction-refused":
    "At this threshold 1 − ε_d − ε_b is at most 0.2, so the readout correction is refused for this site.",
  "rare-component": "Fewer than 20 shots belong to one of the two components, so its rate is poorly known.",
  "leakage-unseen":
    "A Poisson mixture does not see shots that change state while they are read: ε_d can be a factor of two too low at 3 % leakage.",
  "leakage-direction":
    "The counts tell how many shots change state while they are read, not in which direction; both states are taken to leak alike. Calibration shots can tell.",
  "threshold-borrowed":
    "The site's own counts give no threshold; this one is the median of the other sites' thresholds.",
  "threshold-above-all":
    "No site shows two components, so this threshold lies above every count and the site reads dark throughout.",
  "rates-unknown": "No error rates are known for this site, so its readout cannot be corrected.",
  "few-calibration-shots": "There are fewer than 100 calibration shots of one kind, so the error rates are coarse.",
  "always-dark": "The site reads dark in every shot at this threshold.",
  "always-bright": "The site reads bright in every shot at this threshold.",
};

/** Returns the warning with its standing sentence. */
export function detectionWarning(code: DetectionWarningCode): DetectionWarning {
  return { code, message: MESSAGES[code] };
}
