import { readArrayShots } from "@/lib/formats/array-shots";
import { numberedSites } from "@/lib/formats/numbered-sites";
import { openNpyArray } from "@/lib/formats/npy-array";
import type { ShotReader } from "@/lib/formats/shot-batch";
import { isProblem } from "@/lib/problem";

/** Reads a plain NPY array of counts; its evolution times come beside it, in `options.times_us`. */
export const readNpy: ShotReader = async function* (source, options) {
  const array = await openNpyArray(source, "counts", "");
  if (isProblem(array)) return array;
  const trouble = yield* readArrayShots(array, options.role, options.times_us);
  return trouble ?? { format: "npy", siteNames: numberedSites(array.header.shape), positions: null };
};
