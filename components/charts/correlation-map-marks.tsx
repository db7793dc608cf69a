import { plainNumber } from "@/lib/number-text";
import { AxisBottom, round } from "./axis";
import type { ChartTheme } from "./chart-theme";
import { divergingColour } from "./diverging-colours";
import { FrontOverlay, type FrontCurve, type MapCrossing } from "./front-overlay";
import { mapGeometry, type MapData, type MapGeometry } from "./map-geometry";
import type { ChartSize } from "./plot-area";

export interface CorrelationMapProps {
  data: MapData;
  size: ChartSize;
  theme: ChartTheme;
  /** Colours run from −limit to +limit. */
  limit: number;
  crossings: MapCrossing[];
  curves: FrontCurve[];
  preview?: boolean;
  /** Files draw their cells as rectangles; on the page a canvas lies below. */
  cells: "rectangles" | "canvas";
}

/** The correlation map: traces against time, colours centred on zero, the front laid over. A pure function of its props. */
export function CorrelationMapMarks({ data, size, theme, limit, crossings, curves, preview = false, cells }: CorrelationMapProps) {
  const geometry = mapGeometry(data, size);
  return (
    <>
      {cells === "rectangles" && <MapCells data={data} geometry={geometry} theme={theme} limit={limit} />}
      <RowLabels data={data} geometry={geometry} theme={theme} />
      <AxisBottom scale={geometry.time} area={geometry.area} label="evolution time (µs)" theme={theme} />
      <ColourBar geometry={geometry} theme={theme} limit={limit} />
      <FrontOverlay data={data} geometry={geometry} theme={theme} crossings={crossings} curves={curves} preview={preview} />
    </>
  );
}

function MapCells({ data, geometry, theme, limit }: { data: MapData; geometry: MapGeometry; theme: ChartTheme; limit: number }) {
  return (
    <g shapeRendering="crispEdges">
      {data.rows.flatMap((row, r) =>
        (row.values ?? []).map((value, k) => (
          <rect
            key={`${r} ${k}`}
            x={round(geometry.columnEdges[k])}
            y={round(geometry.rowMiddle(r) - geometry.rowHeight / 2)}
            width={round(geometry.columnEdges[k + 1] - geometry.columnEdges[k])}
            height={round(geometry.rowHeight)}
            fill={divergingColour(theme.ground, value, limit) ?? "none"}
          />
        )),
      )}
    </g>
  );
}

const ROW_LABEL_HEIGHT = 15;

function RowLabels({ data, geometry, theme }: { data: MapData; geometry: MapGeometry; theme: ChartTheme }) {
  const every = Math.max(1, Math.ceil(ROW_LABEL_HEIGHT / geometry.rowHeight));
  return (
    <g fontSize={12} fill={theme.muted} textAnchor="end">
      <line x1={geometry.area.left} x2={geometry.area.left} y1={geometry.area.top} y2={geometry.area.bottom} stroke={theme.rule} />
      {data.rows.map((row, r) =>
        r % every === 0 ? (
          <text key={r} x={geometry.area.left - 7} y={round(geometry.rowMiddle(r))} dy="0.34em" className="figures">
            {row.label}
          </text>
        ) : null,
      )}
      <text x={0} y={geometry.area.top - 9} textAnchor="start" fill={theme.ink}>
        {data.rowName}
      </text>
    </g>
  );
}

const BAR_STEPS = 48;

function ColourBar({ geometry, theme, limit }: { geometry: MapGeometry; theme: ChartTheme; limit: number }) {
  const { area } = geometry;
  const x = area.right + 12;
  const step = area.height / BAR_STEPS;
  const level = (q: number) => ((q + 0.5) / BAR_STEPS - 0.5) * 2 * limit;
  return (
    <g fontSize={12} fill={theme.muted}>
      <g shapeRendering="crispEdges">
        {Array.from({ length: BAR_STEPS }, (_, q) => (
          <rect key={q} x={x} y={round(area.bottom - (q + 1) * step)} width={9} height={round(step + 0.5)} fill={divergingColour(theme.ground, level(q), limit) ?? "none"} />
        ))}
      </g>
      <rect x={x} y={area.top} width={9} height={area.height} fill="none" stroke={theme.rule} strokeWidth={0.75} />
      {[limit, limit / 2, 0, -limit / 2, -limit].map((value) => (
        <text key={value} x={x + 14} y={round(area.top + ((limit - value) / (2 * limit)) * area.height)} dy="0.34em" className="figures">
          {plainNumber(value, 3)}
        </text>
      ))}
      <text x={x + 4} y={area.top - 9} fill={theme.ink} textAnchor="middle">
        C
      </text>
    </g>
  );
}
