/** A chart's size and margins in px (or in file units). */
export interface ChartSize {
  width: number;
  height: number;
}

export interface PlotArea {
  left: number;
  right: number;
  top: number;
  bottom: number;
  width: number;
  height: number;
}

export interface Margins {
  left: number;
  right: number;
  top: number;
  bottom: number;
}

/** Returns the rectangle that margins leave for marks. */
export function plotArea(size: ChartSize, margins: Margins): PlotArea {
  const left = margins.left;
  const right = Math.max(left + 1, size.width - margins.right);
  const top = margins.top;
  const bottom = Math.max(top + 1, size.height - margins.bottom);
  return { left, right, top, bottom, width: right - left, height: bottom - top };
}
