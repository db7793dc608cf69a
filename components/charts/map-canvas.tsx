"use client";

import { useEffect, useRef } from "react";
import type { ThemeName } from "@/components/shell/theme-choice";
import { divergingStep, divergingTable } from "./diverging-colours";
import { mapGeometry, type MapData } from "./map-geometry";
import type { ChartSize } from "./plot-area";

interface MapCanvasProps {
  data: MapData;
  size: ChartSize;
  theme: ThemeName;
  limit: number;
}

/** The map's cells as a canvas: thousands of cells stay one element. */
export function MapCanvas({ data, size, theme, limit }: MapCanvasProps) {
  const canvas = useRef<HTMLCanvasElement>(null);
  useEffect(() => {
    const element = canvas.current;
    const context = element?.getContext("2d");
    if (!element || !context) return;
    const ratio = window.devicePixelRatio || 1;
    element.width = Math.round(size.width * ratio);
    element.height = Math.round(size.height * ratio);
    context.scale(ratio, ratio);
    drawCells(context, data, size, theme, limit, ratio);
  }, [data, size, theme, limit]);
  return <canvas ref={canvas} aria-hidden="true" className="absolute inset-0 h-full w-full" />;
}

function drawCells(
  context: CanvasRenderingContext2D,
  data: MapData,
  size: ChartSize,
  theme: ThemeName,
  limit: number,
  ratio: number,
): void {
  const geometry = mapGeometry(data, size);
  const table = divergingTable(theme);
  const snap = (value: number) => Math.round(value * ratio) / ratio;
  data.rows.forEach((row, r) => {
    const top = snap(geometry.rowMiddle(r) - geometry.rowHeight / 2);
    const bottom = snap(geometry.rowMiddle(r) + geometry.rowHeight / 2);
    row.values?.forEach((value, k) => {
      const step = divergingStep(value ?? Number.NaN, limit);
      if (step < 0) return;
      const left = snap(geometry.columnEdges[k]);
      context.fillStyle = `rgb(${table[3 * step]} ${table[3 * step + 1]} ${table[3 * step + 2]})`;
      context.fillRect(left, top, snap(geometry.columnEdges[k + 1]) - left, bottom - top);
    });
  });
}
