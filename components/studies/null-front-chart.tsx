"use client";

import { scaleLinear } from "d3";
import { AxisBottom, round } from "@/components/charts/axis";
import { ChartFigure } from "@/components/charts/chart-figure";
import { screenTheme } from "@/components/charts/chart-theme";
import { plotArea } from "@/components/charts/plot-area";
import { useCursor } from "@/components/charts/use-cursor";
import { useMeasuredWidth } from "@/components/charts/use-measured-width";
import { useThemeName } from "@/components/shell/use-theme-name";
import { plainNumber } from "@/lib/number-text";
import type { NullFrontResult } from "@/lib/science/studies/null-front-result";
import { gammaBins, type GammaBin } from "./null-front-bins";

const HEIGHT = 128;

/** γ of the simulated nearest-neighbour runs as a strip of bars, with the observed γ as a line. */
export function NullFrontChart({ result }: { result: NullFrontResult }) {
  const [container, width] = useMeasuredWidth<HTMLDivElement>(400);
  const theme = screenTheme(useThemeName());
  const observed = result.observed.gamma;
  const { bins, domain } = gammaBins(result.gammas, observed);
  const area = plotArea({ width, height: HEIGHT }, { left: 6, right: 6, top: 18, bottom: 42 });
  const gamma = scaleLinear().domain(domain).range([area.left, area.right]);
  const height = scaleLinear().domain([0, Math.max(1, ...bins.map(({ count }) => count))]).range([0, area.height]);
  const { cursor, handlers } = useCursor({
    columns: bins.length,
    rows: 1,
    at: (x) => {
      const column = bins.findIndex(({ from, to }) => gamma(from) <= x && x < gamma(to));
      return column < 0 ? null : { column, row: 0 };
    },
  });
  const shown = cursor ? bins[cursor.column] : null;
  return (
    <ChartFigure title="γ of the simulated runs" caption={observed === null ? undefined : `line: observed γ = ${plainNumber(observed, 3)}`} readOut={shown && binText(shown)} table={() => <BinsTable bins={bins} />}>
      <div ref={container} style={{ height: HEIGHT }}>
        <svg {...handlers} role="img" aria-label={`Histogram of γ over ${result.fitted} simulated runs. Arrow keys move from bar to bar.`} width={width} height={HEIGHT} className="touch-pan-y">
          {bins.map((one, at) => (
            <rect
              key={one.from}
              x={round(gamma(one.from) + 0.5)}
              width={round(Math.max(0.5, gamma(one.to) - gamma(one.from) - 1))}
              y={round(area.bottom - height(one.count))}
              height={round(height(one.count))}
              fill={theme.muted}
              opacity={cursor?.column === at ? 0.9 : 0.55}
            />
          ))}
          <AxisBottom scale={gamma} area={area} label="γ = 1/β" theme={theme} />
          {observed !== null && <line x1={round(gamma(observed))} x2={round(gamma(observed))} y1={4} y2={area.bottom} stroke={theme.front} strokeWidth={2} />}
        </svg>
      </div>
    </ChartFigure>
  );
}

function binText({ from, to, count }: GammaBin): string {
  return `γ from ${plainNumber(from)} to ${plainNumber(to)}: ${count} simulated runs`;
}

function BinsTable({ bins }: { bins: GammaBin[] }) {
  return (
    <table className="hairline-table figures text-sm">
      <thead>
        <tr>
          <th scope="col">γ from</th>
          <th scope="col">to</th>
          <th scope="col">runs</th>
        </tr>
      </thead>
      <tbody>
        {bins.map(({ from, to, count }) => (
          <tr key={from}>
            <th scope="row">{plainNumber(from)}</th>
            <td>{plainNumber(to)}</td>
            <td>{count}</td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}
