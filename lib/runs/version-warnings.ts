import type { SiteHistogram } from "@/lib/science/detection/histogram";

export interface VersionWarning {
  code: "all-zero" | "dark-site" | "odd-brightness" | "one-shot" | "few-times";
  message: string;
}

/** A site's bright end is compared with the others' when at least this many sites are lit. */
const FEWEST_LIT_SITES = 4;
const BRIGHT_END = 0.99;
const FAR_FACTOR = 2.5;

/** Returns what looks odd about the shots that were read, in plain sentences. */
export function versionWarnings(histograms: SiteHistogram[], siteNames: string[], shotsPerTime: number[]): VersionWarning[] {
  const single = shotsPerTime.filter((shots) => shots === 1).length;
  const warnings = [...darkness(histograms, siteNames), ...oddBrightness(histograms, siteNames)];
  if (single > 0) warnings.push({ code: "one-shot", message: `${single} of ${shotsPerTime.length} times have one shot only: no error bar is possible there.` });
  if (shotsPerTime.length < 3) warnings.push({ code: "few-times", message: "Fewer than three evolution times: no front can be read off." });
  return warnings;
}

function darkness(histograms: SiteHistogram[], siteNames: string[]): VersionWarning[] {
  const dark = siteNames.filter((_, site) => isAlwaysZero(histograms[site]));
  if (dark.length === 0) return [];
  if (dark.length === siteNames.length) return [{ code: "all-zero", message: "Every count of this run is zero: was the detector on?" }];
  return [{ code: "dark-site", message: `Always dark: site ${dark.join(", ")}. Correlations with it are zero.` }];
}

/**
 * Compares the count that 99 % of a site's shots do not exceed: the mean would also tell how often the ions are bright, which is
 * physics. Fractional counts have no fixed zero, so their ratios mean nothing and are not compared.
 */
function oddBrightness(histograms: SiteHistogram[], siteNames: string[]): VersionWarning[] {
  if (histograms.some(({ firstBin }) => firstBin !== 0)) return [];
  const ends = histograms.map(brightEnd);
  const lit = ends.filter((end) => end > 0).sort((low, high) => low - high);
  if (lit.length < FEWEST_LIT_SITES) return [];
  const typical = lit[Math.floor(lit.length / 2)];
  return siteNames.flatMap((name, site): VersionWarning[] => {
    const end = ends[site];
    if (end === 0 || (end <= FAR_FACTOR * typical && FAR_FACTOR * end >= typical)) return [];
    const message = `Site ${name} reaches ${end} counts at its bright end, the others about ${typical}: check its alignment and give it a threshold of its own.`;
    return [{ code: "odd-brightness", message }];
  });
}

function brightEnd({ frequencies }: SiteHistogram): number {
  const shots = frequencies.reduce((sum, frequency) => sum + frequency, 0);
  let passed = 0;
  return Math.max(0, frequencies.findIndex((frequency) => (passed += frequency) >= BRIGHT_END * shots));
}

function isAlwaysZero({ firstBin, frequencies }: SiteHistogram): boolean {
  return firstBin === 0 && frequencies.length === 1;
}
