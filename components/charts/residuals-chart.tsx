"use client";

import { extent, leastIndex, scaleLinear } from "d3";
import type { ReactNode } from "react";
import { useThemeName } from "@/components/shell/use-theme-name";
import { plainNumber } from "@/lib/number-text";
import { AxisBottom, AxisLeft } from "./axis";
import { ChartFigure } from "./chart-figure";
import { screenTheme } from "./chart-theme";
import { plotArea } from "./plot-area";
import { useCursor } from "./use-cursor";
import { useMeasuredWidth } from "./use-measured-width";

/** Residuals τ − model of both fits at one point, in units of its standard error. */
export interface Residual {
  label: string;
  distance: number;
  linear: number | null;
  powerLaw: number | null;
}

interface ResidualsChartProps {
  title: string;
  caption?: ReactNode;
  residuals: Residual[];
  height: number;
}

/** Residuals of both fits against distance: power law filled, linear hollow; hairlines at ±2 standard errors. */
export function ResidualsChart({ title, caption, residuals, height }: ResidualsChartProps) {
  const [container, width] = useMeasuredWidth<HTMLDivElement>(480);
  const theme = screenTheme(useThemeName());
  const area = plotArea({ width, height }, { left: 34, right: 14, top: 26, bottom: 40 });
  const [, farthest] = extent(residuals, (residual) => residual.distance);
  const largest = Math.max(2.5, ...residuals.flatMap((residual) => [Math.abs(residual.linear ?? 0), Math.abs(residual.powerLaw ?? 0)]));
  const distance = scaleLinear().domain([0, (farthest ?? 1) * 1.06]).range([area.left, area.right]);
  const spread = scaleLinear().domain([-largest, largest]).nice(4).range([area.bottom, area.top]);
  const { cursor, handlers } = useCursor({
    columns: residuals.length,
    rows: 1,
    at: (x) => {
      const nearest = leastIndex(residuals, (a, b) => Math.abs(distance(a.distance) - x) - Math.abs(distance(b.distance) - x));
      return nearest === undefined || nearest < 0 ? null : { column: nearest, row: 0 };
    },
  });
  const shown = cursor ? residuals[cursor.column] : null;
  return (
    <ChartFigure
      title={title}
      caption={caption}
      readOut={
        shown && `${shown.label}, distance ${plainNumber(shown.distance)}: power law ${plainNumber(shown.powerLaw, 3)} σ, linear ${plainNumber(shown.linear, 3)} σ`
      }
      table={() => <ResidualsTable residuals={residuals} />}
    >
      <div ref={container} style={{ height }}>
        <svg {...handlers} role="img" aria-label={`${title}: ${residuals.length} points. Arrow keys move from point to point.`} width={width} height={height} className="touch-pan-y">
          <AxisLeft scale={spread} area={area} label="(τ − fit) / σ" theme={theme} />
          <AxisBottom scale={distance} area={area} label="distance (sites)" theme={theme} />
          {[-2, 0, 2].map((level) => (
            <line key={level} x1={area.left} x2={area.right} y1={spread(level)} y2={spread(level)} stroke={level === 0 ? theme.rule : theme.hairline} />
          ))}
          {residuals.map((residual, q) => (
            <g key={residual.label}>
              {residual.linear !== null && <circle cx={distance(residual.distance)} cy={spread(residual.linear)} r={4} fill={theme.paper} stroke={theme.ink} strokeWidth={1.3} />}
              {residual.powerLaw !== null && <circle cx={distance(residual.distance)} cy={spread(residual.powerLaw)} r={3.2} fill={theme.front} />}
              {cursor?.column === q && <line x1={distance(residual.distance)} x2={distance(residual.distance)} y1={area.top} y2={area.bottom} stroke={theme.ink} />}
            </g>
          ))}
        </svg>
      </div>
    </ChartFigure>
  );
}

function ResidualsTable({ residuals }: { residuals: Residual[] }) {
  return (
    <table className="hairline-table figures text-sm">
      <thead>
        <tr>
          <th scope="col">trace</th>
          <th scope="col">distance</th>
          <th scope="col">linear (σ)</th>
          <th scope="col">power law (σ)</th>
        </tr>
      </thead>
      <tbody>
        {residuals.map((residual) => (
          <tr key={residual.label}>
            <th scope="row">{residual.label}</th>
            <td>{plainNumber(residual.distance)}</td>
            <td>{plainNumber(residual.linear, 3)}</td>
            <td>{plainNumber(residual.powerLaw, 3)}</td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}
