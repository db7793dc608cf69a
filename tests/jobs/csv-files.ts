const encoder = new TextEncoder();

/** A CSV large enough that its reading takes a while: 12 sites, 20 times, 20 000 shots each. Each `variant` has bytes of its own and the same shots. */
export function longCsv(variant = 0): Uint8Array {
  const lines = [`time_us,shot,${Array.from({ length: 12 }, (_, i) => `s${i}`).join(",")}`];
  for (let k = 0; k < 20; k++) {
    for (let s = 0; s < 20_000; s++) lines.push(`${5 * (k + 1)},${s},${Array.from({ length: 12 }, (_, i) => (s * 7 + i * 3 + k) % 17).join(",")}`);
  }
  return encoder.encode(`${lines.join("\n")}\n${"\n".repeat(variant)}`);
}

/** Two sites at three times, with a comment that makes the bytes its own. */
export function smallCsv(comment: string): Uint8Array {
  return encoder.encode(`# ${comment}\ntime_us,shot,a,b\n5,0,1,9\n5,1,0,8\n10,0,2,7\n10,1,0,9\n20,0,3,1\n20,1,0,0\n`);
}
