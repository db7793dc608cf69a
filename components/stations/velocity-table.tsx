import { plainNumber, withUncertainty } from "@/lib/number-text";
import type { FrontResult } from "@/lib/science/front/front-result";

/** Velocities: the line's one, the power law's at each point, and the slopes between neighbours. */
export function VelocityTable({ front }: { front: FrontResult }) {
  const { velocity } = front;
  return (
    <section className="min-w-0">
      <h2 className="text-[1rem]">
        Velocity <span className="label ml-1 font-normal">sites per ms</span>
      </h2>
      <div className="max-h-64 overflow-auto" tabIndex={0} role="region" aria-label="Velocities">
        <table className="hairline-table figures text-sm">
          <thead>
            <tr>
              <th scope="col">distance</th>
              <th scope="col" className="text-right">
                aβτ<sup>β−1</sup>
              </th>
              <th scope="col" className="text-right">
                95 %
              </th>
              <th scope="col" className="text-right">
                to the next point
              </th>
            </tr>
          </thead>
          <tbody>
            {velocity.powerLaw.map((point) => {
              const next = velocity.betweenPoints.find((step) => step.fromDistance === point.distance);
              return (
                <tr key={`${point.distance} ${point.time_us}`}>
                  <th scope="row">{plainNumber(point.distance)}</th>
                  <td className="text-right">{plainNumber(point.value_sites_per_ms, 3)}</td>
                  <td className="text-right whitespace-nowrap">
                    {plainNumber(point.low_sites_per_ms, 3)} … {plainNumber(point.high_sites_per_ms, 3)}
                  </td>
                  <td className="text-right">{next ? withUncertainty(next.value_sites_per_ms, next.error_sites_per_ms) : ""}</td>
                </tr>
              );
            })}
          </tbody>
        </table>
      </div>
      {velocity.powerLaw.length === 0 && <p className="text-muted">No power-law fit, so no velocity along the front.</p>}
    </section>
  );
}
