/** The slow, obvious twin of the bootstrap: the same random draws, plain loops, nothing shared with the kernel. */
import { createRandomStream, philoxBlock, seedKey, type RandomStream } from "@/lib/science/stats/philox";
import { RANDOM_PURPOSES } from "@/lib/science/stats/random-purposes";

const RATE = 0.978;
const SHARES = [96, 94, 46, 15, 3];

/** Poisson(0.978) by one byte, by a further word where the byte does not decide. */
function firstDraw(byte: number, repairs: RandomStream): number {
  let start = 0;
  for (let value = 0; value < SHARES.length; value++) {
    start += SHARES[value];
    if (byte < start) return value;
  }
  const u = repairs.nextUint32();
  let probability = Math.exp(-RATE);
  let left = 0;
  for (let value = 0; value < 15; value++) {
    left += 256 * probability - (SHARES[value] ?? 0);
    if (u < Math.min(2 ** 32 - 1, Math.round((left / 2) * 2 ** 32))) return value;
    probability *= RATE / (value + 1);
  }
  return 15;
}

function drawBelow(bound: number, stream: RandomStream): number {
  const unfair = BigInt(2 ** 32) % BigInt(bound);
  for (;;) {
    const product = BigInt(stream.nextUint32()) * BigInt(bound);
    if ((product & 0xffffffffn) >= unfair) return Number(product >> 32n);
  }
}

/** The xoshiro128** generator of Blackman and Vigna (2021), as published: returns its next 32-bit word and moves the state on. */
export function nextXoshiro(state: Uint32Array): number {
  const rotate = (x: number, k: number) => ((x << k) | (x >>> (32 - k))) >>> 0;
  const word = Math.imul(rotate(Math.imul(state[1], 5) >>> 0, 7), 9) >>> 0;
  const shifted = state[1] << 9;
  state[2] ^= state[0];
  state[3] ^= state[1];
  state[1] ^= state[2];
  state[0] ^= state[3];
  state[2] ^= shifted;
  state[3] = rotate(state[3], 11);
  return word;
}

/** How often each of `shots` shots is in replicate b of evolution time k. */
export function plainMultiplicities(seed: number, k: number, b: number, shots: number): number[] {
  const { key0, key1 } = seedKey(seed);
  const state = new Uint32Array(4);
  philoxBlock(Math.floor(b / 4) % 8, Math.floor(b / 32), k, RANDOM_PURPOSES.bootstrapShots, key0, key1, state, 0);
  const repairs = createRandomStream(seed, RANDOM_PURPOSES.bootstrapRepairs, k, b);
  const times: number[] = [];
  for (let s = 0; s < shots; s++) {
    const byte = (nextXoshiro(state) >>> (8 * (b % 4))) & 0xff;
    times.push(firstDraw((byte + 128) % 256, repairs));
  }
  let total = times.reduce((sum, n) => sum + n, 0);
  const most = Math.max(...times);
  for (; total < shots; total++) times[drawBelow(shots, repairs)] += 1;
  while (total > shots) {
    const ball = drawBelow(shots * most, repairs);
    const s = Math.floor(ball / most);
    if (ball % most >= times[s]) continue;
    times[s] -= 1;
    total -= 1;
  }
  return times;
}

/** C_ij plug-in of shots `[s][site]` of ±1, shot s taken `times[s]` times. */
export function plainCorrelator(spins: number[][], times: number[], i: number, j: number): number {
  let shots = 0;
  let both = 0;
  let first = 0;
  let second = 0;
  spins.forEach((shot, s) => {
    shots += times[s];
    both += times[s] * shot[i] * shot[j];
    first += times[s] * shot[i];
    second += times[s] * shot[j];
  });
  return both / shots - (first / shots) * (second / shots);
}

/** ⟨σ_i⟩ of the same. */
export function plainMean(spins: number[][], times: number[], i: number): number {
  const shots = times.reduce((sum, n) => sum + n, 0);
  return spins.reduce((sum, shot, s) => sum + times[s] * shot[i], 0) / shots;
}
