/** Returns the names of sites that a file gives none: site_0, site_1, … for the last axis of an array's shape. */
export function numberedSites(shape: number[]): string[] {
  return Array.from({ length: shape[shape.length - 1] }, (_, site) => `site_${site}`);
}
