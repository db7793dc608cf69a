"use client";

import { useEffect, useRef } from "react";
import type { ChartSize } from "./plot-area";

interface CellCanvasProps {
  size: ChartSize;
  /** `[column + 1]`, px, rising. */
  columnEdges: number[];
  /** `[row + 1]`, px; row r lies between edges r and r + 1, in either direction. */
  rowEdges: number[];
  /** CSS colour of a cell, or null to leave the ground. Keep its identity while colours stay the same. */
  colour: (row: number, column: number) => string | null;
}

/** A grid of coloured cells as one canvas: thousands of cells stay one element. */
export function CellCanvas({ size, columnEdges, rowEdges, colour }: CellCanvasProps) {
  const canvas = useRef<HTMLCanvasElement>(null);
  useEffect(() => {
    const element = canvas.current;
    const context = element?.getContext("2d");
    if (!element || !context) return;
    const ratio = window.devicePixelRatio || 1;
    element.width = Math.round(size.width * ratio);
    element.height = Math.round(size.height * ratio);
    context.scale(ratio, ratio);
    const columns = columnEdges.map((edge) => Math.round(edge * ratio) / ratio);
    const rows = rowEdges.map((edge) => Math.round(edge * ratio) / ratio);
    for (let row = 0; row + 1 < rows.length; row++) {
      const top = Math.min(rows[row], rows[row + 1]);
      const height = Math.abs(rows[row + 1] - rows[row]);
      for (let column = 0; column + 1 < columns.length; column++) {
        const fill = colour(row, column);
        if (fill === null) continue;
        context.fillStyle = fill;
        context.fillRect(columns[column], top, columns[column + 1] - columns[column], height);
      }
    }
  }, [size, columnEdges, rowEdges, colour]);
  return <canvas ref={canvas} aria-hidden="true" className="absolute inset-0 h-full w-full" />;
}
