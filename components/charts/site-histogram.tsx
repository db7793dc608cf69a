"use client";

import { useThemeName } from "@/components/shell/use-theme-name";
import { groupedCount, plainNumber } from "@/lib/number-text";
import { screenTheme } from "./chart-theme";
import { histogramGeometry, HistogramMarks, type SiteHistogram } from "./histogram-marks";
import { useCursor } from "./use-cursor";
import { useMeasuredWidth } from "./use-measured-width";

interface SiteHistogramProps {
  histogram: SiteHistogram;
  logarithmic: boolean;
  lastCount: number;
  height: number;
}

/** One site's histogram, a small multiple of its neighbours, with its own read-out. */
export function SiteHistogramChart({ histogram, logarithmic, lastCount, height }: SiteHistogramProps) {
  const [container, width] = useMeasuredWidth<HTMLDivElement>(200);
  const size = { width, height };
  const geometry = histogramGeometry({ histogram, size, logarithmic, lastCount });
  const columns = Math.max(1, lastCount - histogram.firstBin + 1);
  const { cursor, handlers } = useCursor({
    columns,
    rows: 1,
    at: (x) => ({ column: Math.max(0, Math.min(columns - 1, Math.round(geometry.count.invert(x) - histogram.firstBin))), row: 0 }),
  });
  const value = cursor ? histogram.firstBin + cursor.column : null;
  const theme = screenTheme(useThemeName());
  return (
    <figure className="min-w-0">
      <div ref={container} style={{ height }}>
        <svg {...handlers} role="img" aria-label={`Histogram of ${histogram.name}. Arrow keys move the read-out.`} width={width} height={height} className="touch-pan-y">
          <HistogramMarks histogram={histogram} size={size} theme={theme} logarithmic={logarithmic} lastCount={lastCount} />
          {value !== null && (
            <line x1={geometry.count(value)} x2={geometry.count(value)} y1={geometry.area.top} y2={geometry.area.bottom} stroke={theme.ink} strokeDasharray="2 2" />
          )}
        </svg>
      </div>
      <figcaption className="label figures min-h-[1.3rem] text-center" aria-live="polite">
        {value === null ? captionOf(histogram) : `${plainNumber(value)} counts: ${groupedCount(histogram.frequencies[value - histogram.firstBin] ?? 0)} shots`}
      </figcaption>
    </figure>
  );
}

function captionOf(histogram: SiteHistogram): string {
  return histogram.threshold === null ? "no threshold yet" : `θ = ${plainNumber(histogram.threshold)}`;
}
