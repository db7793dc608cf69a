import { packSpins, type PackedSpins } from "@/lib/science/correlators/packed-spins";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";

/** Shots `[s][site]` of ±1 whose neighbours agree more often than not; site `darkSite` never flips. */
export function correlatedSpins(shots: number, sites: number, seed: number, darkSite = -1): number[][] {
  const stream = createRandomStream(seed, RANDOM_PURPOSES.simulation, 0);
  return Array.from({ length: shots }, () => {
    const shot: number[] = [];
    for (let i = 0; i < sites; i++) {
      const follow = i > 0 && stream.nextUniform() < 0.5;
      shot.push(i === darkSite ? -1 : follow ? shot[i - 1] : stream.nextUniform() < 0.4 ? 1 : -1);
    }
    return shot;
  });
}

/** The same shots, packed by way of counts. */
export function packShots(spins: number[][]): PackedSpins {
  const sites = spins[0].length;
  const counts = Uint16Array.from(spins.flat(), (spin) => (spin === 1 ? 9 : 0));
  return packSpins(counts, spins.length, sites, new Float64Array(sites).fill(4.5), "up");
}
