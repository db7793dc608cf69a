import { fixedNumber, plainNumber } from "@/lib/number-text";
import type { FrontResult, PointInfluence } from "@/lib/science/front/front-result";

/** What the fits would be without each point, the one that moves γ most first. */
export function InfluenceTable({ front, nameOf }: { front: FrontResult; nameOf: (label: string) => string }) {
  const sorted = [...front.influence].sort((first, second) => size(second) - size(first));
  return (
    <section className="min-w-0">
      <h2 className="text-[1rem]">
        Without one point <span className="label ml-1 font-normal">the most influential first</span>
      </h2>
      <div className="max-h-64 overflow-auto" tabIndex={0} role="region" aria-label="Fits without one point">
        <table className="hairline-table figures text-sm">
          <thead>
            <tr>
              <th scope="col">left out</th>
              <th scope="col" className="text-right">
                β
              </th>
              <th scope="col" className="text-right">
                v
              </th>
              <th scope="col" className="text-right">
                γ moves (σ)
              </th>
            </tr>
          </thead>
          <tbody>
            {sorted.map((point) => (
              <tr key={point.label}>
                <th scope="row">{nameOf(point.label)}</th>
                <td className="text-right">{plainNumber(point.beta, 3)}</td>
                <td className="text-right">{plainNumber(point.v_sites_per_ms, 3)}</td>
                <td className="text-right">{fixedNumber(point.gammaShiftInErrors, 2)}</td>
              </tr>
            ))}
          </tbody>
        </table>
      </div>
    </section>
  );
}

function size({ gammaShiftInErrors }: PointInfluence): number {
  return Math.abs(gammaShiftInErrors ?? 0);
}
