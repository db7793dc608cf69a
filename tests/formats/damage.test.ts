import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import { gzipSync } from "node:zlib";
import { describe, expect, it } from "vitest";
import { memorySource } from "@/lib/formats/memory-source";
import { isProblem } from "@/lib/problem";
import { readAll } from "./read-all";

const FOLDER = fileURLToPath(new URL("../fixtures/malformed/", import.meta.url));
const WHOLE = ["plain.csv", "fractional.csv", "quoted-headers.csv", "two-members.csv.gz", "fortran.npy", "int64.npz", "big-endian.npz", "per-time.zip", "plain.h5"];
const FILES = [
  ...WHOLE.map((name) => readFileSync(FOLDER + name)),
  Buffer.from(`time_us,shot,site,count\n${Array.from({ length: 80 }, (_, n) => `5,${n >> 2},${n & 3},${n}`).join("\n")}\n`),
  gzipSync(readFileSync(`${FOLDER}int64.npz`)),
  gzipSync(readFileSync(`${FOLDER}fortran.npy`)),
];

/** A small fixed-seed generator (the 32-bit mix of SplitMix), so that every run damages the same bytes. */
function generator(seed: number): (below: number) => number {
  let state = seed;
  return (below) => {
    state = (state + 0x9e3779b9) | 0;
    let mixed = Math.imul(state ^ (state >>> 16), 0x21f0aaad);
    mixed = Math.imul(mixed ^ (mixed >>> 15), 0x735a2d97);
    return ((mixed ^ (mixed >>> 15)) >>> 0) % below;
  };
}

function damaged(bytes: Buffer, draw: (below: number) => number): Buffer {
  const kind = draw(3);
  if (kind === 0) return bytes.subarray(0, draw(bytes.length));
  if (kind === 1) {
    const copy = Buffer.from(bytes);
    for (let flips = 1 + draw(4); flips > 0; flips--) copy[draw(copy.length)] ^= 1 << draw(8);
    return copy;
  }
  const [from, to, donor] = [draw(bytes.length), draw(bytes.length), FILES[draw(FILES.length)]];
  return Buffer.concat([bytes.subarray(0, from), donor.subarray(draw(donor.length)), bytes.subarray(to)]);
}

describe("damaged files", () => {
  it.each(FILES.map((bytes, index) => ({ bytes, name: WHOLE[index] ?? `made file ${index - WHOLE.length}`, index })))(
    "$name cut, flipped and spliced 50 times is read or refused with a place, never thrown at",
    async ({ bytes, index }) => {
      const draw = generator(index);
      let refused = 0;
      for (let n = 0; n < 50; n++) {
        const answer = await readAll(memorySource(damaged(bytes, draw), 1 + draw(400)), { filename: "damaged", times_us: [5, 10, 20], maxExpandedBytes: 5e6 });
        if (!isProblem(answer)) continue;
        refused++;
        expect(answer.errors.length).toBeGreaterThan(0);
        expect(answer.errors.every(({ where, message }) => where !== "" && message !== "")).toBe(true);
      }
      expect(refused).toBeGreaterThan(5);
    },
  );
});
