import { isNoFit, type FrontResult } from "@/lib/science/front/front-result";

/** The numbers a study takes from a front; null where there is no fit. */
export interface FrontNumbers {
  gamma: number | null;
  beta: number | null;
  v_sites_per_ms: number | null;
}

/** Returns γ, β and v of a front. */
export function frontNumbers({ powerLaw, linear }: FrontResult): FrontNumbers {
  return {
    gamma: isNoFit(powerLaw) ? null : powerLaw.gamma.value,
    beta: isNoFit(powerLaw) ? null : powerLaw.beta.value,
    v_sites_per_ms: isNoFit(linear) ? null : linear.v_sites_per_ms.value,
  };
}
