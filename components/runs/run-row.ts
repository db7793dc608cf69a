/** What the runs table shows of one run. */
export interface RunRow {
  id: string;
  title: string;
  campaign: string | null;
  createdAt: string;
  createdBy: string;
  status: "empty" | "ingesting" | "ready" | "failed";
  sites: number | null;
  times: number;
  shotsKept: number;
  shotsSetAside: number;
  model: "ising" | "xy" | "other";
  alpha: number | null;
  /** Of the latest finished analysis. */
  analysis: {
    number: number;
    verdict: string;
    beta: { value: number | null; error: number | null; low: number | null; high: number | null; unbounded: boolean } | null;
    /** The map, thinned out: `[row][column]` from the foot, and its colour limit. */
    thumbnail: { cells: (number | null)[][]; limit: number } | null;
  } | null;
}
