import "server-only";
import type { Database } from "@/db/connection";
import { BRIGHT_SLOT, DARK_SLOT } from "@/db/schema/shot-blocks";
import type { ArchiveRole, ShotBatch } from "@/lib/formats/shot-batch";
import { addToSegments, brightnessDrift, createSegmentSums, type SegmentSums, type SiteDrift } from "@/lib/science/detection/brightness-drift";
import { countHistograms, mergeHistograms, type SiteHistogram } from "@/lib/science/detection/histogram";
import type { VersionKey } from "./block-store";
import type { CountType, ShotBlock } from "./shot-block";
import { SlotWriter } from "./slot-writer";

/** Pending shots of all times together may take this much before they are written. */
const MOST_PENDING_BYTES = 64 * 1024 * 1024;
const CALIBRATION_SLOTS = { "calibration-dark": DARK_SLOT, "calibration-bright": BRIGHT_SLOT } as const;

interface Slot {
  time_us: number;
  writer: SlotWriter;
  /** `[site]`, sums of counts for the brightness. */
  sums: Float64Array;
  /** The same by order of arrival, for the drift. */
  segments: SegmentSums;
}

/** Takes batches from readers and keeps what a version consists of; memory does not grow with the number of shots. */
export class ShotCollector {
  countType: CountType = "uint16";
  readonly setAside: Record<string, number> = {};
  readonly histograms = new Map<ArchiveRole, SiteHistogram[]>();
  private readonly slots = new Map<number, Slot>();
  private readonly slotOfTime = new Map<number, number>();
  private readonly database: Database;
  private readonly key: VersionKey;
  private readonly sites: number;

  constructor(database: Database, key: VersionKey, sites: number) {
    this.database = database;
    this.key = key;
    this.sites = sites;
  }

  async add(batch: ShotBatch): Promise<void> {
    if (batch.counts instanceof Float32Array) this.countType = "float32";
    this.countMissing(batch);
    this.addToHistograms(batch);
    for (const [slot, shots] of this.shotsBySlot(batch)) {
      const { writer, sums, segments } = this.slotAt(slot);
      for (const s of shots) addToSegments(segments, batch.counts, s * this.sites);
      writer.add(gather(batch, shots, sums));
      if (writer.isFull) await writer.flush();
    }
    await this.relieve();
  }

  async endArchive(): Promise<void> {
    for (const { writer } of this.slots.values()) await writer.endArchive();
  }

  /** Times in order, each with its slot, kept shots and brightness `[site]`. */
  times(): { time_us: number; slot: number; shots: number; brightness: number[] }[] {
    return [...this.slots]
      .filter(([slot]) => slot >= 0)
      .map(([slot, { time_us, writer, sums }]) => ({
        time_us,
        slot,
        shots: writer.shots,
        brightness: Array.from(sums, (sum) => (writer.shots > 0 ? sum / writer.shots : 0)),
      }))
      .filter(({ shots }) => shots > 0)
      .sort((first, second) => first.time_us - second.time_us);
  }

  /** `[site]`, over all evolution times. */
  drift(): SiteDrift[] {
    const times = [...this.slots].filter(([slot]) => slot >= 0).map(([, { segments }]) => segments);
    return brightnessDrift(times, this.sites);
  }

  /** How many evolution times have been met. */
  get timeCount(): number {
    return this.slotOfTime.size;
  }

  shotsIn(slot: number): number {
    return this.slots.get(slot)?.writer.shots ?? 0;
  }

  private countMissing(batch: ShotBatch): void {
    let missing = 0;
    for (const mark of batch.missing) missing += mark;
    if (missing > 0 && batch.role === "shots") this.setAside.missing = (this.setAside.missing ?? 0) + missing;
  }

  private addToHistograms(batch: ShotBatch): void {
    const found = countHistograms(batch.counts, this.sites, batch.missing);
    const before = this.histograms.get(batch.role);
    this.histograms.set(batch.role, before ? before.map((histogram, site) => mergeHistograms(histogram, found[site])) : found);
  }

  /** Kept shots of a batch by slot, in file order. */
  private shotsBySlot(batch: ShotBatch): Map<number, number[]> {
    const bySlot = new Map<number, number[]>();
    for (let s = 0; s < batch.shots; s++) {
      if (batch.missing[s] === 1) continue;
      const slot = batch.role === "shots" ? this.slotOf(batch.times_us[s]) : CALIBRATION_SLOTS[batch.role];
      const shots = bySlot.get(slot);
      if (shots) shots.push(s);
      else bySlot.set(slot, [s]);
    }
    return bySlot;
  }

  private slotOf(time_us: number): number {
    const known = this.slotOfTime.get(time_us);
    if (known !== undefined) return known;
    const slot = this.slotOfTime.size;
    this.slotOfTime.set(time_us, slot);
    this.slots.set(slot, this.newSlot(slot, time_us));
    return slot;
  }

  private slotAt(slot: number): Slot {
    const known = this.slots.get(slot);
    if (known) return known;
    const added = this.newSlot(slot, Number.NaN);
    this.slots.set(slot, added);
    return added;
  }

  private newSlot(slot: number, time_us: number): Slot {
    return { time_us, writer: new SlotWriter(this.database, this.key, slot, this.sites), sums: new Float64Array(this.sites), segments: createSegmentSums(this.sites) };
  }

  private async relieve(): Promise<void> {
    let pending = 0;
    for (const { writer } of this.slots.values()) pending += writer.pendingBytes;
    if (pending < MOST_PENDING_BYTES) return;
    for (const { writer } of this.slots.values()) await writer.flush();
  }
}

/** Copies the named shots out of a batch and adds their counts to the sums. */
function gather(batch: ShotBatch, shots: number[], sums: Float64Array): ShotBlock {
  const { sites } = batch;
  const counts = batch.counts instanceof Uint16Array ? new Uint16Array(shots.length * sites) : new Float32Array(shots.length * sites);
  const shotNumbers = new Float64Array(shots.length);
  shots.forEach((s, to) => {
    shotNumbers[to] = batch.shotNumbers[s];
    for (let i = 0; i < sites; i++) {
      const count = batch.counts[s * sites + i];
      counts[to * sites + i] = count;
      sums[i] += count;
    }
  });
  return { shots: shots.length, sites, shotNumbers, counts };
}
