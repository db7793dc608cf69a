import "server-only";
import { database } from "@/db/connection";
import { refusal, type Actor } from "@/lib/accounts/policy";
import { invalidAt, isProblem, type Problem } from "@/lib/problem";
import { findCurrentVersion, findRunInGroup } from "./find-run";
import { loadHistograms, type HistogramRole } from "./load-counts";

export interface ShownHistograms {
  version: number;
  sites: { site: number; name: string; firstBin: number; counts: number[] }[];
}

/** Returns how often each count occurs at each site, or at one: `counts[b]` shots have a count of `firstBin + b`. */
export async function getHistograms(actor: Actor, runId: string, { site, role }: { site?: number; role: HistogramRole }): Promise<ShownHistograms | Problem> {
  const refused = refusal(actor, "run.read");
  if (refused) return refused;
  const run = await findRunInGroup(database(), actor, runId);
  if (isProblem(run)) return run;
  const version = await findCurrentVersion(database(), run);
  if (!version) return { version: 0, sites: [] };
  if (site !== undefined && site >= version.sites) return invalidAt("site", `the run has sites 0 to ${version.sites - 1}`);
  const histograms = await loadHistograms(database(), { runId, version: version.number }, role);
  const sites = histograms.map(({ firstBin, frequencies }, i) => ({ site: i, name: version.siteNames[i], firstBin, counts: Array.from(frequencies) }));
  return { version: version.number, sites: site === undefined ? sites : sites.slice(site, site + 1) };
}
