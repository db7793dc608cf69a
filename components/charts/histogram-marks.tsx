import { componentDensities } from "@/lib/science/detection/component-densities";
import type { ModelComponents } from "@/lib/science/detection/count-model";
import { scaleLinear, scaleLog } from "d3";
import { AxisBottom, round } from "./axis";
import type { ChartTheme } from "./chart-theme";
import { plotArea, type ChartSize } from "./plot-area";

/** One site's count histogram with what was fitted to it. */
export interface SiteHistogram {
  site: number;
  name: string;
  /** Count of the first bin; bins are one count wide. */
  firstBin: number;
  /** `[bin]`, shots. */
  frequencies: number[];
  threshold: number | null;
  mixture: ModelComponents | null;
}

export interface HistogramProps {
  histogram: SiteHistogram;
  size: ChartSize;
  theme: ChartTheme;
  logarithmic: boolean;
  /** Counts beyond this are not drawn; shared by small multiples so that they compare. */
  lastCount: number;
}

/** Returns scales and area of a site's histogram. */
export function histogramGeometry({ histogram, size, logarithmic, lastCount }: Omit<HistogramProps, "theme">) {
  const area = plotArea(size, { left: 4, right: 4, top: 18, bottom: 20 });
  const tallest = Math.max(1, ...histogram.frequencies);
  const frequency = logarithmic
    ? scaleLog().domain([0.6, tallest * 1.3]).range([area.bottom, area.top]).clamp(true)
    : scaleLinear().domain([0, tallest * 1.05]).range([area.bottom, area.top]);
  return {
    area,
    count: scaleLinear().domain([histogram.firstBin - 0.5, Math.max(lastCount, histogram.firstBin + 1) + 0.5]).range([area.left, area.right]),
    frequency,
  };
}

/** Bars left of the threshold in the dark colour and right of it in the bright one; fitted components as curves. */
export function HistogramMarks(props: HistogramProps) {
  const { histogram, theme, lastCount } = props;
  const { area, count, frequency } = histogramGeometry(props);
  const barWidth = Math.max(1, count(1) - count(0) - (count(1) - count(0) > 4 ? 1 : 0));
  const shots = histogram.frequencies.reduce((sum, shotsInBin) => sum + shotsInBin, 0);
  return (
    <>
      {histogram.frequencies.map((shotsInBin, bin) => {
        const value = histogram.firstBin + bin;
        if (shotsInBin === 0 || value > lastCount) return null;
        const bright = histogram.threshold !== null && value > histogram.threshold;
        const top = round(frequency(shotsInBin));
        return (
          <rect
            key={value}
            x={round(count(value) - barWidth / 2)}
            y={top}
            width={round(barWidth)}
            height={round(area.bottom - top)}
            fill={bright ? theme.bright : theme.dark}
            opacity={histogram.threshold === null ? 0.45 : 0.6}
          />
        );
      })}
      {histogram.mixture && <MixtureCurves histogram={histogram} shots={shots} lastCount={lastCount} count={count} frequency={frequency} theme={theme} />}
      {histogram.threshold !== null && (
        <line x1={round(count(histogram.threshold))} x2={round(count(histogram.threshold))} y1={area.top} y2={area.bottom} stroke={theme.ink} strokeWidth={1.5} />
      )}
      <text x={area.left} y={12} fontSize={12} fill={theme.ink} fontWeight={600}>
        {histogram.name}
      </text>
      <AxisBottom scale={count} area={area} label="" theme={theme} fontSize={11} />
    </>
  );
}

/** Shots; below it a component is no longer drawn. */
const LEAST_DRAWN = 0.01;

interface CurvesProps {
  histogram: SiteHistogram;
  shots: number;
  lastCount: number;
  count: (value: number) => number;
  frequency: (value: number) => number;
  theme: ChartTheme;
}

function MixtureCurves({ histogram, shots, lastCount, count, frequency, theme }: CurvesProps) {
  if (!histogram.mixture) return null;
  const { brightWeight } = histogram.mixture;
  const densities = componentDensities(histogram.mixture);
  const components = [
    { density: densities.dark, weight: 1 - brightWeight, colour: theme.dark },
    { density: densities.bright, weight: brightWeight, colour: theme.bright },
  ];
  return (
    <g fill="none" strokeWidth={1.4}>
      {components.map((component) => (
        <path key={component.colour} stroke={component.colour} d={componentPath(component, shots, histogram.firstBin, lastCount, count, frequency)} />
      ))}
    </g>
  );
}

function componentPath(
  component: { density: (n: number) => number; weight: number },
  shots: number,
  first: number,
  last: number,
  count: (value: number) => number,
  frequency: (value: number) => number,
): string {
  const points: string[] = [];
  for (let value = Math.max(0, first); value <= last; value++) {
    const expected = shots * component.weight * component.density(value);
    if (expected > LEAST_DRAWN) points.push(`${round(count(value))},${round(frequency(expected))}`);
  }
  return points.length > 1 ? `M${points.join("L")}` : "";
}
