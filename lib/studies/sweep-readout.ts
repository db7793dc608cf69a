import type { DetectionSite } from "@/db/schema/detections";
import { sitesBeyondCorrection, type ReadoutErrors } from "@/lib/science/correlators/readout-correction";
import { calibrateSite, type CalibrationCounts } from "@/lib/science/detection/calibration";
import { poissonErrorRates, type ErrorRates } from "@/lib/science/detection/threshold";

/** Rates closer than this are the same rates. */
const SAME_RATE = 1e-9;

type RatesAt = (site: DetectionSite, threshold: number) => ErrorRates | null;

/**
 * Returns the ε's of a detection with all thresholds moved by each of the shifts, `[shift]`. They come from whatever gives the
 * saved ones at the saved thresholds, counted calibration shots or fitted Poisson components; null where neither does, or where
 * a site is beyond correction.
 */
export function shiftedReadoutErrors(sites: readonly DetectionSite[], shifts: readonly number[], calibration: CalibrationCounts | null): (ReadoutErrors | null)[] {
  const sources: RatesAt[] = [(site, threshold) => calibration && calibrateSite(calibration, site.site, threshold), fromMixture];
  const source = sources.find((rates) => sites.every((site) => sameRates(rates(site, site.threshold), site)));
  return shifts.map((shift) => {
    const rates = sites.map((site) => (shift === 0 ? savedRates(site) : (source?.(site, site.threshold + shift) ?? null)));
    if (!rates.every((rate) => rate !== null)) return null;
    const errors = { falseBright: Float64Array.from(rates, ({ falseBright }) => falseBright), falseDark: Float64Array.from(rates, ({ falseDark }) => falseDark) };
    return sitesBeyondCorrection(errors).length > 0 ? null : errors;
  });
}

function savedRates({ falseBright, falseDark }: DetectionSite): ErrorRates | null {
  return falseBright === null || falseDark === null ? null : { falseBright, falseDark };
}

function fromMixture({ mixture }: DetectionSite, threshold: number): ErrorRates | null {
  return mixture && poissonErrorRates(threshold, mixture.dark, mixture.bright);
}

function sameRates(rates: ErrorRates | null, site: DetectionSite): boolean {
  const saved = savedRates(site);
  return rates !== null && saved !== null && Math.abs(rates.falseBright - saved.falseBright) < SAME_RATE && Math.abs(rates.falseDark - saved.falseDark) < SAME_RATE;
}
