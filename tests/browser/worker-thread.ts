/** Runs one simulated evolution time wherever it is loaded, and returns every array of its result as hexadecimal bytes. */
import { analyseTime, type TimeResult } from "@/lib/science/correlators/analyse-time";
import { packSpins } from "@/lib/science/correlators/packed-spins";
import { planReferenceTraces } from "@/lib/science/correlators/trace-plan";
import { createRandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";
import { drawPoisson } from "@/lib/science/stats/random-variates";

const SITES = 10;
const SHOTS = 1500;

/** `replicates` 0 is the preview. */
export function simulatedTime(replicates: number): Record<string, string> {
  const stream = createRandomStream(12, RANDOM_PURPOSES.simulation, 3);
  const counts = new Uint16Array(SHOTS * SITES);
  for (let s = 0; s < SHOTS; s++) {
    let up = stream.nextUniform() < 0.5;
    for (let i = 0; i < SITES; i++) {
      if (stream.nextUniform() < 0.2) up = !up;
      counts[s * SITES + i] = drawPoisson(stream, up ? 11 : 0.6);
    }
  }
  const result = analyseTime({
    timeIndex: 3,
    spins: packSpins(counts, SHOTS, SITES, new Float64Array(SITES).fill(3.5), "up"),
    estimator: "plug-in",
    readout: null,
    plan: planReferenceTraces({ x: Float64Array.from({ length: SITES }, (_, i) => i), y: null }, 0),
    replicates,
    seed: 5,
    interval: "percentile",
    blockLength: 1,
    pairErrors: "law",
  });
  return inHexadecimal(result);
}

function inHexadecimal(result: TimeResult): Record<string, string> {
  const arrays = Object.entries(result).filter((entry): entry is [string, Float64Array | Uint8Array] => ArrayBuffer.isView(entry[1]));
  return Object.fromEntries(arrays.map(([name, array]) => [name, hexadecimal(new Uint8Array(array.buffer, array.byteOffset, array.byteLength))]));
}

function hexadecimal(bytes: Uint8Array): string {
  return Array.from(bytes, (byte) => byte.toString(16).padStart(2, "0")).join("");
}
