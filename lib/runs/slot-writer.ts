import "server-only";
import type { Database } from "@/db/connection";
import { readBlocks, removeBlocks, writeBlock, type VersionKey } from "./block-store";
import { joinBlocks, sortBlock, type ShotBlock } from "./shot-block";

const BLOCK_BYTES = 1024 * 1024;

/**
 * Gathers the kept shots of one slot and writes them as blocks of about 1 MiB. Shots that do not come by rising number are
 * put in order at the end of their archive, in memory when they are still here, else by reading that archive's blocks again.
 */
export class SlotWriter {
  shots = 0;
  pendingBytes = 0;
  private pending: ShotBlock[] = [];
  private nextSeq = 0;
  private archiveSeq = 0;
  private lastNumber = -Infinity;
  private unsorted = false;
  private readonly database: Database;
  private readonly key: VersionKey;
  private readonly slot: number;
  private readonly sites: number;

  constructor(database: Database, key: VersionKey, slot: number, sites: number) {
    this.database = database;
    this.key = key;
    this.slot = slot;
    this.sites = sites;
  }

  /** Adds shots in file order; the block's arrays belong to the writer from now on. */
  add(block: ShotBlock): void {
    for (const number of block.shotNumbers) {
      if (number < this.lastNumber) this.unsorted = true;
      this.lastNumber = number;
    }
    this.pending.push(block);
    this.pendingBytes += block.counts.byteLength + block.shotNumbers.byteLength;
    this.shots += block.shots;
  }

  get isFull(): boolean {
    return this.pendingBytes >= BLOCK_BYTES;
  }

  /** Writes what is pending. */
  async flush(): Promise<void> {
    if (this.pending.length === 0) return;
    const joined = joinBlocks(this.pending, this.sites);
    this.pending = [];
    this.pendingBytes = 0;
    await this.write(joined);
  }

  /** Ends an archive: puts its shots in order and writes them. */
  async endArchive(): Promise<void> {
    if (this.unsorted && this.nextSeq === this.archiveSeq) {
      this.pending = [sortBlock(joinBlocks(this.pending, this.sites))];
    } else if (this.unsorted) {
      await this.flush();
      const written = await readBlocks(this.database, this.key, this.slot, this.archiveSeq);
      await removeBlocks(this.database, this.key, this.slot, this.archiveSeq);
      this.nextSeq = this.archiveSeq;
      await this.write(sortBlock(joinBlocks(written, this.sites)));
    }
    await this.flush();
    this.archiveSeq = this.nextSeq;
    this.lastNumber = -Infinity;
    this.unsorted = false;
  }

  private async write({ shots, shotNumbers, counts }: ShotBlock): Promise<void> {
    const shotsPerBlock = Math.max(1, Math.floor(BLOCK_BYTES / (this.sites * counts.BYTES_PER_ELEMENT + 8)));
    for (let from = 0; from < shots; from += shotsPerBlock) {
      const to = Math.min(shots, from + shotsPerBlock);
      const part = {
        shots: to - from,
        sites: this.sites,
        shotNumbers: shotNumbers.subarray(from, to),
        counts: counts.subarray(from * this.sites, to * this.sites),
      };
      await writeBlock(this.database, this.key, this.slot, this.nextSeq, part);
      this.nextSeq += 1;
    }
  }
}
