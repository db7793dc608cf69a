import { faultyTimes, readArrayShots } from "@/lib/formats/array-shots";
import { tooLarge } from "@/lib/formats/gunzip";
import { openNpyArray, smallValues, type NpyArray } from "@/lib/formats/npy-array";
import { numberedSites } from "@/lib/formats/numbered-sites";
import type { ArchiveRole, ReadOptions, ShotBatch, ShotReader } from "@/lib/formats/shot-batch";
import { listZipMembers, type ZipMember } from "@/lib/formats/zip-members";
import { invalidAt, isProblem, type Problem } from "@/lib/problem";

const SUFFIX = ".npy";
const CALIBRATIONS: [string, ArchiveRole][] = [["calibration_dark", "calibration-dark"], ["calibration_bright", "calibration-bright"]];
const READ_NAMES = ["counts", "times_us", "positions", ...CALIBRATIONS.map(([name]) => name)];

/**
 * Reads an NPZ archive: `counts` with `times_us`, and optionally `positions`, `calibration_dark` and
 * `calibration_bright`, whose shots come after those of `counts`. For a calibration role, `counts` alone.
 */
export const readNpz: ShotReader = async function* (source, options) {
  const members = await listZipMembers(source);
  if (isProblem(members)) return members;
  const arrays = await openArrays(members, options);
  if (isProblem(arrays)) return arrays;
  const counts = arrays.get("counts");
  if (counts === undefined) return lacking(members);
  const positions = await readPositions(arrays.get("positions"), counts);
  if (isProblem(positions)) return positions;
  const trouble = options.role === "shots" ? yield* runShots(arrays, counts, members) : yield* readArrayShots(counts, options.role, null);
  return trouble ?? { format: "npz", siteNames: numberedSites(counts.header.shape), positions };
};

async function* runShots(arrays: Map<string, NpyArray>, counts: NpyArray, members: ZipMember[]): AsyncGenerator<ShotBatch, Problem | null> {
  const times_us = await readTimes(arrays.get("times_us"), members);
  if (isProblem(times_us)) return times_us;
  const calibrations = CALIBRATIONS.flatMap(([name, role]) => {
    const array = arrays.get(name);
    return array === undefined ? [] : [{ array, role }];
  });
  const sites = siteCount(counts);
  for (const { array } of calibrations) {
    if (siteCount(array) !== sites) return invalidAt(array.name, `${siteCount(array)} sites, counts has ${sites}`);
  }
  const trouble = yield* readArrayShots(counts, "shots", times_us);
  if (trouble !== null) return trouble;
  for (const { array, role } of calibrations) {
    const found = yield* readArrayShots(array, role, null);
    if (found !== null) return found;
  }
  return null;
}

async function openArrays(members: ZipMember[], options: ReadOptions): Promise<Map<string, NpyArray> | Problem> {
  const arrays = new Map<string, NpyArray>();
  const wanted = members.filter(({ name }) => name.endsWith(SUFFIX) && READ_NAMES.includes(arrayName(name)));
  if (wanted.reduce((sum, { size }) => sum + size, 0) > options.maxExpandedBytes) return tooLarge(options.maxExpandedBytes);
  for (const member of wanted) {
    const name = arrayName(member.name);
    if (arrays.has(name)) return invalidAt(name, "is there twice");
    const array = await openNpyArray(member, name, `${name} `);
    if (isProblem(array)) return array;
    arrays.set(name, array);
  }
  return arrays;
}

async function readTimes(array: NpyArray | undefined, members: ZipMember[]): Promise<Float64Array | Problem> {
  if (array === undefined) return invalidAt("times_us", `no array times_us; the file holds: ${namesOf(members)}`);
  const { shape } = array.header;
  if (shape.length !== 1) return invalidAt("times_us", `shape (${shape.join(", ")}); one time each is needed`);
  const times_us = await smallValues(array);
  if (isProblem(times_us)) return times_us;
  return faultyTimes(times_us, false) ?? times_us;
}

/** Returns `[site][x]` or `[site][x, y]`, null without the array. */
async function readPositions(array: NpyArray | undefined, counts: NpyArray): Promise<number[][] | null | Problem> {
  if (array === undefined) return null;
  const { shape, fortranOrder } = array.header;
  const [sites, axes] = [shape[0], shape[1] ?? 1];
  if (shape.length < 1 || shape.length > 2 || axes < 1 || axes > 2 || sites !== siteCount(counts)) {
    return invalidAt("positions", `shape (${shape.join(", ")}); (${siteCount(counts)}, 1) or (${siteCount(counts)}, 2) is needed`);
  }
  const values = await smallValues(array);
  if (isProblem(values)) return values;
  if (!values.every(Number.isFinite)) return invalidAt("positions", "a position is not a number");
  const at = (site: number, axis: number): number => values[fortranOrder ? axis * sites + site : site * axes + axis];
  return Array.from({ length: sites }, (_, site) => Array.from({ length: axes }, (_, axis) => at(site, axis)));
}

function lacking(members: ZipMember[]): Problem {
  const names = namesOf(members);
  return invalidAt(names, `no array counts; the file holds: ${names}`);
}

function namesOf(members: ZipMember[]): string {
  const names = members.slice(0, 20).map(({ name }) => arrayName(name).slice(0, 60)).join(", ");
  return members.length > 20 ? `${names}, …` : names;
}

function arrayName(memberName: string): string {
  return memberName.endsWith(SUFFIX) ? memberName.slice(0, -SUFFIX.length) : memberName;
}

function siteCount(array: NpyArray): number {
  return array.header.shape[array.header.shape.length - 1];
}
