import { zipSync } from "fflate";
import { writeNpy, type PlainArray } from "@/lib/formats/write-npy";

/** Returns the bytes of an NPZ archive of named arrays; the same arrays give the same bytes at any time. */
export function writeNpz(arrays: Record<string, PlainArray>): Uint8Array {
  const members = Object.entries(arrays).map(([name, array]) => [`${name}.npy`, writeNpy(array)] as const);
  return zipSync(Object.fromEntries(members), { level: 6, mtime: "1980-01-01T00:00:00" });
}
