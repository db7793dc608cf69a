import { plainNumber } from "@/lib/number-text";
import type { DetectionAnswer } from "./detection-types";

const SMALLEST_PADDED = 1e-5;

/** Warnings that every site shares are said once, above the table. */
function sharedWarnings(warnings: DetectionAnswer["warnings"]): string[] {
  const [first = [], ...others] = warnings;
  return first.filter(({ code }) => others.every((site) => site.some((warning) => warning.code === code))).map(({ code }) => code);
}

/** Thresholds, error rates and fidelity of every site, in per cent where they are rates; warnings in words. */
export function DetectionTable({ detection, siteNames }: { detection: DetectionAnswer; siteNames: string[] }) {
  const shared = sharedWarnings(detection.warnings);
  const ownWarnings = siteNames.map((_, site) => (detection.warnings[site] ?? []).filter(({ code }) => !shared.includes(code)).map(({ message }) => message).join(" "));
  const anyOwn = ownWarnings.some((text) => text !== "");
  return (
    <section className="mt-6">
      <h2>
        Detection {detection.number} <span className="label ml-1 font-normal">by {detection.createdBy}, {detection.createdAt.slice(0, 10)}</span>
      </h2>
      {detection.warnings[0]
        ?.filter(({ code }) => shared.includes(code))
        .map(({ code, message }) => (
          <p key={code} className="mt-1 text-sm text-warning">
            {message}
          </p>
        ))}
      <div className="overflow-x-auto" tabIndex={0} role="region" aria-label={`Sites of detection ${detection.number}`}>
        <table className="hairline-table figures mt-1">
          <thead>
            <tr>
              <th scope="col">site</th>
              <th scope="col" className="text-right">θ</th>
              <th scope="col" className="text-right" title="P(reads bright | dark), 95 % interval">ε<sub>d</sub> (%)</th>
              <th scope="col" className="text-right" title="P(reads dark | bright), 95 % interval">ε<sub>b</sub> (%)</th>
              <th scope="col" className="text-right whitespace-nowrap" title="1 − (ε_d + ε_b)/2">fidelity (%)</th>
              {anyOwn && <th scope="col" className="pl-6">to keep in mind</th>}
            </tr>
          </thead>
          <tbody>
            {siteNames.map((name, site) => (
              <tr key={site}>
                <th scope="row" className="whitespace-nowrap">{name}</th>
                <td className="text-right">{plainNumber(detection.thresholds[site])}</td>
                <td className="text-right whitespace-nowrap">
                  <Rate value={detection.falseBright[site]} interval={detection.falseBrightInterval[site]} />
                </td>
                <td className="text-right whitespace-nowrap">
                  <Rate value={detection.falseDark[site]} interval={detection.falseDarkInterval[site]} />
                </td>
                <td className="text-right">{percent(detection.fidelity[site], 4)}</td>
                {anyOwn && <td className="pl-6 text-sm text-warning">{ownWarnings[site]}</td>}
              </tr>
            ))}
          </tbody>
        </table>
      </div>
    </section>
  );
}

function Rate({ value, interval }: { value: number | null; interval: [number, number] | null }) {
  return (
    <>
      {percent(value, 3)}
      {interval && (
        <span className="label ml-1.5">
          {percent(interval[0], 2)} … {percent(interval[1], 2)}
        </span>
      )}
    </>
  );
}

/** Keeps its last zeros, so that figures stand under one another. */
function percent(value: number | null, digits: number): string {
  if (value === null) return "–";
  return value < SMALLEST_PADDED ? plainNumber(100 * value, digits) : (100 * value).toPrecision(digits);
}
