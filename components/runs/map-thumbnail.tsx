"use client";

import { useEffect, useRef } from "react";
import { divergingColour } from "@/components/charts/diverging-colours";
import { useThemeName } from "@/components/shell/use-theme-name";

interface MapThumbnailProps {
  /** `[row][column]` from the foot upwards. */
  cells: (number | null)[][];
  limit: number;
  width: number;
  height: number;
}

/** A run's map at a glance; decoration beside the figures in its row. */
export function MapThumbnail({ cells, limit, width, height }: MapThumbnailProps) {
  const canvas = useRef<HTMLCanvasElement>(null);
  const theme = useThemeName();
  useEffect(() => {
    const element = canvas.current;
    const context = element?.getContext("2d");
    if (!element || !context) return;
    element.width = cells[0]?.length ?? 1;
    element.height = cells.length;
    cells.forEach((row, r) =>
      row.forEach((value, column) => {
        context.fillStyle = divergingColour(theme, value, limit) ?? "transparent";
        context.fillRect(column, cells.length - 1 - r, 1, 1);
      }),
    );
  }, [cells, limit, theme]);
  return <canvas ref={canvas} aria-hidden="true" className="block [image-rendering:pixelated]" style={{ width, height }} />;
}
