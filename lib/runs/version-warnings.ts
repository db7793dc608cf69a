import type { SiteHistogram } from "@/lib/science/detection/histogram";

export interface VersionWarning {
  code: "all-zero" | "dark-site" | "one-shot" | "few-times";
  message: string;
}

/** Returns what looks odd about the shots that were read, in plain sentences. */
export function versionWarnings(histograms: SiteHistogram[], siteNames: string[], shotsPerTime: number[]): VersionWarning[] {
  const darkSites = siteNames.filter((_, site) => isAlwaysZero(histograms[site]));
  const warnings: VersionWarning[] = [];
  if (darkSites.length === siteNames.length) {
    warnings.push({ code: "all-zero", message: "Every count of this run is zero: was the detector on?" });
  } else if (darkSites.length > 0) {
    warnings.push({ code: "dark-site", message: `Always dark: site ${darkSites.join(", ")}. Correlations with it are zero.` });
  }
  const single = shotsPerTime.filter((shots) => shots === 1).length;
  if (single > 0) warnings.push({ code: "one-shot", message: `${single} of ${shotsPerTime.length} times have one shot only: no error bar is possible there.` });
  if (shotsPerTime.length < 3) warnings.push({ code: "few-times", message: "Fewer than three evolution times: no front can be read off." });
  return warnings;
}

function isAlwaysZero({ firstBin, frequencies }: SiteHistogram): boolean {
  return firstBin === 0 && frequencies.length === 1;
}
