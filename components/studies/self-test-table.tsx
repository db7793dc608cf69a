import { plainNumber } from "@/lib/number-text";
import type { Coverage, ParameterTest, SelfTestResult } from "@/lib/science/studies/self-test-result";

const NOMINAL = 0.95;
/** Left end of the coverage bars; below it a bar begins at the edge. */
const BAR_START = 0.5;

/** Bias and coverage of every reported number over the simulated runs. */
export function SelfTestTable({ result }: { result: SelfTestResult }) {
  const rows: { name: string; test: ParameterTest }[] = [
    { name: "γ", test: result.gamma },
    { name: "v (sites/ms)", test: result.v_sites_per_ms },
    ...result.crossings.map((test) => ({ name: `τ, ${test.label} (µs)`, test })),
  ];
  return (
    <div className="max-h-72 overflow-auto" tabIndex={0} role="region" aria-label="Bias and coverage">
      <table className="hairline-table figures text-sm">
        <thead>
          <tr>
            <th scope="col">number</th>
            <th scope="col" className="text-right">
              truth
            </th>
            <th scope="col" className="text-right">
              bias / error
            </th>
            <th scope="col" className="text-right">
              held by 95 %
            </th>
            <th scope="col" aria-hidden="true" />
          </tr>
        </thead>
        <tbody>
          {rows.map(({ name, test }) => (
            <tr key={name}>
              <th scope="row">{name}</th>
              <td className="text-right">{plainNumber(test.truth, 3)}</td>
              <td className="text-right">{plainNumber(test.biasInErrors, 2)}</td>
              <td className="text-right whitespace-nowrap">{coverageText(test.coverage)}</td>
              <td className="w-28">
                <CoverageBar coverage={test.coverage} />
              </td>
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  );
}

function coverageText({ held, of }: Coverage): string {
  return of === 0 ? "–" : `${held} of ${of}`;
}

/** The share with its 95 % limits from 50 to 100 %, a line at 95 %. */
function CoverageBar({ coverage }: { coverage: Coverage }) {
  const { share, low, high } = coverage;
  if (share === null || low === null || high === null) return null;
  const at = (value: number) => `${(100 * (Math.max(BAR_START, value) - BAR_START)) / (1 - BAR_START)}%`;
  return (
    <svg width="100%" height={14} aria-hidden="true" className="block overflow-visible">
      <line x1="0%" x2="100%" y1={7} y2={7} stroke="var(--hairline)" />
      <line x1={at(NOMINAL)} x2={at(NOMINAL)} y1={0} y2={14} stroke="var(--rule)" />
      <line x1={at(low)} x2={at(high)} y1={7} y2={7} stroke="var(--ink)" strokeWidth={2} />
      <circle cx={at(share)} cy={7} r={3.2} fill="var(--ink)" />
    </svg>
  );
}
