import type { SitePositions } from "@/lib/science/correlators/trace-plan";

/** Returns the positions an analysis uses: given with the run, else found in its archive, else 0, 1, 2 … */
export function positionsOf(given: number[][] | null, found: number[][] | null, sites: number): number[][] {
  return given ?? found ?? Array.from({ length: sites }, (_, i) => [i]);
}

/** Returns positions as columns. */
export function positionColumns(positions: number[][]): SitePositions {
  const planar = positions.some((position) => position.length > 1);
  return {
    x: Float64Array.from(positions, ([x]) => x),
    y: planar ? Float64Array.from(positions, ([, y]) => y ?? 0) : null,
  };
}
