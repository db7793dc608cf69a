import { wordsPerSite, type BrightIs, type PackedSpins } from "@/lib/science/correlators/packed-spins";
import type { ReadoutErrors } from "@/lib/science/correlators/readout-correction";
import type { RandomStream } from "@/lib/science/stats/philox";

/** Returns the spins as a detector with these errors reads them: every spin of a site flips on its own. */
export function flipReadout(spins: PackedSpins, errors: ReadoutErrors, brightIs: BrightIs, stream: RandomStream): PackedSpins {
  const stride = wordsPerSite(spins.shots);
  const words = spins.words.slice();
  const fallsDown = new Uint32Array(stride);
  const goesUp = new Uint32Array(stride);
  for (let i = 0; i < spins.sites; i++) {
    const [upLost, downLost] = brightIs === "up" ? [errors.falseDark[i], errors.falseBright[i]] : [errors.falseBright[i], errors.falseDark[i]];
    markShots(fallsDown, spins.shots, upLost, stream);
    markShots(goesUp, spins.shots, downLost, stream);
    for (let w = 0; w < stride; w++) {
      const word = words[i * stride + w];
      words[i * stride + w] = word ^ ((word & fallsDown[w]) | (~word & goesUp[w]));
    }
  }
  return { ...spins, words };
}

/** Marks every shot with the given chance, leaping from one marked shot to the next by a geometric draw. */
function markShots(marks: Uint32Array, shots: number, chance: number, stream: RandomStream): void {
  marks.fill(0);
  if (!(chance > 0)) return;
  const logMiss = Math.log1p(-Math.min(chance, 1));
  for (let s = -1; ; ) {
    s += 1 + Math.floor(Math.log1p(-stream.nextUniform()) / logMiss);
    if (!(s < shots)) return;
    marks[s >>> 5] |= 1 << (s & 31);
  }
}
