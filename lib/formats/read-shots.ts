import { readCsvCounts } from "@/lib/formats/csv-counts";
import { readCsvShots } from "@/lib/formats/csv-shots";
import { plainStream } from "@/lib/formats/gunzip";
import { readNpy } from "@/lib/formats/npy";
import { readNpz } from "@/lib/formats/npz";
import { recognise } from "@/lib/formats/recognise";
import type { ShotFormat, ShotReader } from "@/lib/formats/shot-batch";
import { spool } from "@/lib/formats/spool";
import { isProblem } from "@/lib/problem";

const READERS: Record<ShotFormat, ShotReader> = {
  "csv-shots": readCsvShots,
  "csv-counts": readCsvCounts,
  npy: readNpy,
  npz: readNpz,
};

/**
 * Reads a file of shots of any known format, recognised by content, in batches of bounded size. Returns the summary, or
 * the Problem that ended the reading; batches yielded before a Problem are void.
 */
export const readShots: ShotReader = async function* (source, options) {
  const format = await recognise(source, options);
  if (isProblem(format)) return format;
  if (format !== "packed") return yield* READERS[format](source, options);
  const unpacked = await spool(plainStream(source, options.maxExpandedBytes));
  if (isProblem(unpacked)) return unpacked;
  try {
    const inner = await recognise(unpacked, options);
    if (isProblem(inner)) return inner;
    if (inner === "packed") throw new Error("An unpacked file cannot be packed");
    return yield* READERS[inner](unpacked, options);
  } finally {
    await unpacked.close();
  }
};
