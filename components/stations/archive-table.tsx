import { ProblemNotice } from "@/components/shell/problem-notice";
import type { ProblemPlace } from "@/lib/problem";
import { byteCount } from "@/lib/number-text";

export interface ArchiveRow {
  id: string;
  filename: string;
  bytes: number;
  sha256: string;
  role: "shots" | "calibration-dark" | "calibration-bright";
  state: "waiting" | "read" | "refused";
  format: string | null;
  problem: { detail: string; errors?: ProblemPlace[] } | null;
  createdAt: string;
  createdBy: string;
}

const ROLES: Record<ArchiveRow["role"], string> = { shots: "shots", "calibration-dark": "calibration, dark", "calibration-bright": "calibration, bright" };
const FORMATS: Record<string, string> = { "csv-shots": "CSV, a row a shot", "csv-counts": "CSV, a row a count", npy: "NPY", npz: "NPZ" };
const STATES: Record<ArchiveRow["state"], string> = { waiting: "waiting", read: "read", refused: "refused" };

/** The raw archives of a run, kept as they came, with their hashes. */
export function ArchiveTable({ archives }: { archives: ArchiveRow[] }) {
  if (archives.length === 0) return null;
  return (
    <section>
      <h2>Archives</h2>
      <div className="overflow-x-auto" tabIndex={0} role="region" aria-label="Archives">
        <table className="hairline-table figures mt-1">
          <thead>
            <tr>
              <th scope="col">file</th>
              <th scope="col">role</th>
              <th scope="col">format</th>
              <th scope="col" className="text-right">size</th>
              <th scope="col">SHA-256</th>
              <th scope="col">state</th>
            </tr>
          </thead>
          <tbody>
            {archives.map((archive) => (
              <tr key={archive.id}>
                <td className="max-w-64 break-words">
                  <a href={`/api/v1/archives/${archive.id}/raw`} download>
                    {archive.filename}
                  </a>
                </td>
                <td className="whitespace-nowrap">{ROLES[archive.role]}</td>
                <td className="whitespace-nowrap">{archive.format ? (FORMATS[archive.format] ?? archive.format) : "–"}</td>
                <td className="text-right whitespace-nowrap">{byteCount(archive.bytes)}</td>
                <td title={archive.sha256}>{archive.sha256.slice(0, 12)}…</td>
                <td className={archive.state === "refused" ? "text-error" : ""}>{STATES[archive.state]}</td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
      {archives
        .filter((archive) => archive.state === "refused")
        .map((archive) => (
          <div key={archive.id} className="mt-3">
            <ProblemNotice title={`${archive.filename} was refused`} problem={archive.problem} />
          </div>
        ))}
    </section>
  );
}
