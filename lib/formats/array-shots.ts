import { arrayRows } from "@/lib/formats/array-rows";
import { BatchBuilder, fitsCount } from "@/lib/formats/batch-builder";
import type { NpyArray } from "@/lib/formats/npy-array";
import type { ArchiveRole, ShotBatch } from "@/lib/formats/shot-batch";
import { ShotNumberRegister } from "@/lib/formats/shot-number-register";
import { invalidAt, isProblem, type Problem } from "@/lib/problem";

const MOST_SITES = 4096;

/**
 * Reads an array of counts as shots: (T, M, N) with T increasing times or (S, N) with S times for the role shots; (K, N)
 * or (1, K, N) without times for calibration roles. Times in µs. Yields batches; returns the Problem, or null.
 */
export async function* readArrayShots(
  array: NpyArray,
  role: ArchiveRole,
  times_us: ArrayLike<number> | null,
): AsyncGenerator<ShotBatch, Problem | null> {
  const layout = shotLayout(array, role, times_us);
  if (isProblem(layout)) return layout;
  let current = 0;
  const sites = array.header.shape[array.header.shape.length - 1];
  const builder = new BatchBuilder(role, sites, (site) => layout.placeOf(current, site));
  for await (const block of arrayRows(array)) {
    if (isProblem(block)) return block;
    for (let r = 0; r < block.rows; r++) {
      current = block.first + r;
      builder.row.set(block.values.subarray(r * sites, (r + 1) * sites));
      const unfit = array.header.kind === "f" ? builder.row.findIndex((count) => !fitsCount(count)) : -1;
      if (unfit >= 0) return invalidAt(layout.placeOf(current, unfit), `${builder.row[unfit]} is beyond what a count can be`);
      builder.push(layout.timeOf(current), layout.numberOf(current));
    }
    yield* builder.takeReady();
  }
  const trouble = builder.finish();
  if (trouble !== null) return trouble;
  yield* builder.takeReady();
  return null;
}

/** Returns the Problem of times that are no evolution times, or null; with `increasing`, they must increase strictly. */
export function faultyTimes(times_us: ArrayLike<number>, increasing: boolean): Problem | null {
  for (let k = 0; k < times_us.length; k++) {
    const time = times_us[k];
    if (!Number.isFinite(time) || time < 0) return invalidAt("times_us", `times_us[${k}] is ${time}; an evolution time is 0 or more`);
    if (increasing && k > 0 && time <= times_us[k - 1]) {
      return invalidAt("times_us", `times must increase: times_us[${k}] is ${time} after ${times_us[k - 1]}`);
    }
  }
  return null;
}

/** What a row of the array is: `row` counts the shots in the order of the file. */
interface ShotLayout {
  timeOf: (row: number) => number;
  numberOf: (row: number) => number;
  placeOf: (row: number, site: number) => string;
}

function shotLayout(array: NpyArray, role: ArchiveRole, times_us: ArrayLike<number> | null): ShotLayout | Problem {
  const { shape } = array.header;
  const sites = shape[shape.length - 1];
  const where = array.prefix === "" ? "shape" : array.name;
  if (shape.length < 2 || shape.length > 3) return invalidAt(where, `${array.name} has shape (${shape.join(", ")}); ${wantedShapes(role)}`);
  if (sites === 0 || sites > MOST_SITES) return invalidAt(where, `${sites} sites; 1 to ${MOST_SITES} are read`);
  if (role !== "shots") return calibrationLayout(array, role, where);
  if (times_us === null) {
    return invalidAt("times_us", `the array has no times of its own; give the ${shape[0]} evolution times in µs beside it (times_us=a,b,c)`);
  }
  if (times_us.length !== shape[0]) {
    return invalidAt("times_us", `${times_us.length} times for ${array.name} of shape (${shape.join(", ")}): ${shape[0]} are needed`);
  }
  return faultyTimes(times_us, shape.length === 3) ?? (shape.length === 3 ? gridLayout(array, times_us) : listLayout(array, times_us));
}

function calibrationLayout(array: NpyArray, role: ArchiveRole, where: string): ShotLayout | Problem {
  const { shape } = array.header;
  if (shape.length === 3 && shape[0] !== 1) return invalidAt(where, `${array.name} has shape (${shape.join(", ")}); ${wantedShapes(role)}`);
  const lead = shape.length === 3 ? "[0]" : "";
  return { timeOf: () => NaN, numberOf: (row) => row, placeOf: (row, site) => `${array.name}${lead}[${row}][${site}]` };
}

function gridLayout(array: NpyArray, times_us: ArrayLike<number>): ShotLayout {
  const [times, shots] = array.header.shape;
  const { fortranOrder } = array.header;
  const timeIndex = (row: number): number => (fortranOrder ? row % times : Math.floor(row / shots));
  const numberOf = (row: number): number => (fortranOrder ? Math.floor(row / times) : row % shots);
  const placeOf = (row: number, site: number): string => `${array.name}[${timeIndex(row)}][${numberOf(row)}][${site}]`;
  return { timeOf: (row) => times_us[timeIndex(row)], numberOf, placeOf };
}

function listLayout(array: NpyArray, times_us: ArrayLike<number>): ShotLayout {
  const register = new ShotNumberRegister();
  return {
    timeOf: (row) => times_us[row],
    numberOf: (row) => register.addNext(times_us[row]),
    placeOf: (row, site) => `${array.name}[${row}][${site}]`,
  };
}

function wantedShapes(role: ArchiveRole): string {
  return role === "shots" ? "(times, shots, sites) or (shots, sites) is needed" : "(shots, sites) is needed";
}
