"use client";

import { useState, type KeyboardEvent, type PointerEvent } from "react";

export interface Cursor {
  column: number;
  row: number;
}

interface Grid {
  columns: number;
  rows: number;
  /** Returns the cell under a point in the chart's own px, or null outside. */
  at: (x: number, y: number) => Cursor | null;
  /** Where the keyboard starts. */
  start?: Cursor;
}

const STEPS: Record<string, [number, number]> = {
  ArrowRight: [1, 0],
  ArrowLeft: [-1, 0],
  ArrowUp: [0, 1],
  ArrowDown: [0, -1],
  PageUp: [10, 0],
  PageDown: [-10, 0],
};

/**
 * Moves one cursor over a chart's grid by pointer, touch and arrow keys (Home and End run to the ends, Escape lifts it).
 * Rows grow upwards. Returns the cursor and the handlers for the chart's element.
 */
export function useCursor(grid: Grid, onPick?: (cursor: Cursor) => void) {
  const [cursor, setCursor] = useState<Cursor | null>(null);
  const inside = cursor && cursor.column < grid.columns && cursor.row < grid.rows ? cursor : null;

  function onPointerMove(event: PointerEvent<SVGSVGElement>) {
    const box = event.currentTarget.getBoundingClientRect();
    setCursor(grid.at(event.clientX - box.left, event.clientY - box.top));
  }

  function onKeyDown(event: KeyboardEvent<SVGSVGElement>) {
    if (event.key === "Escape") return setCursor(null);
    if (event.key === "Enter" && inside && onPick) return onPick(inside);
    const from = inside ?? grid.start ?? { column: 0, row: 0 };
    const next = moved(event.key, from, grid, inside === null);
    if (!next) return;
    event.preventDefault();
    setCursor(next);
  }

  const handlers = {
    onPointerMove,
    onPointerDown: onPointerMove,
    // A lifted finger leaves too, but what it pointed at should stay to be read.
    onPointerLeave: (event: PointerEvent<SVGSVGElement>) => event.pointerType === "mouse" && setCursor(null),
    onKeyDown,
    onBlur: () => setCursor(null),
    onClick: () => inside && onPick?.(inside),
    tabIndex: 0,
  };
  return { cursor: inside, setCursor, handlers };
}

function moved(key: string, from: Cursor, grid: Grid, first: boolean): Cursor | null {
  if (key === "Home") return { ...from, column: 0 };
  if (key === "End") return { ...from, column: grid.columns - 1 };
  const step = STEPS[key];
  if (!step) return null;
  if (first) return from;
  return {
    column: Math.max(0, Math.min(grid.columns - 1, from.column + step[0])),
    row: Math.max(0, Math.min(grid.rows - 1, from.row + step[1])),
  };
}
