const LINES = 15;

/** Depth lines of an invented shore, the outermost being the strandline: the ground of the public pages. */
export function TideLines() {
  return (
    <svg aria-hidden="true" className="pointer-events-none absolute inset-0 h-full w-full" viewBox="0 0 1440 900" preserveAspectRatio="xMaxYMax slice" fill="none">
      {Array.from({ length: LINES }, (_, q) => (
        <path key={q} d={shoreline(q)} stroke={q === LINES - 1 ? "var(--front)" : "var(--rule)"} strokeWidth={q === LINES - 1 ? 2.2 : 1} opacity={q === LINES - 1 ? 0.9 : 0.2 + 0.025 * q} />
      ))}
    </svg>
  );
}

/** A straight cone bent by long-range coupling: each line reaches a distance earlier than the one below. */
function shoreline(q: number): string {
  const reach = (q + 1) / LINES;
  const points = Array.from({ length: 41 }, (_, s) => {
    const x = 560 + (880 * s) / 40;
    const y = 900 - 560 * reach * (s / 40) ** (0.9 + 0.9 * reach) - 26 * reach * (s / 40) * Math.sin(s / 6 + q / 3) + 12;
    return `${x.toFixed(1)},${y.toFixed(1)}`;
  });
  return `M${points.join("L")}`;
}
