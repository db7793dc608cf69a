const PAGE_SHOTS = 1024;

interface TimeEntry {
  count: number;
  /** Bits of the shot numbers met, by page: memory grows with the shots, whatever their numbers and order. */
  pages: Map<number, Uint32Array>;
  page: Uint32Array;
  pageNumber: number;
}

/** Remembers which shot numbers a file has given at which time. */
export class ShotNumberRegister {
  size = 0;
  private readonly times = new Map<number, TimeEntry>();
  private time_us = NaN;
  private entry = emptyEntry();

  /** Enters a shot; false when this time already has that number. Shot numbers are whole and not negative. */
  add(time_us: number, shot: number): boolean {
    const entry = this.entryAt(time_us);
    const pageNumber = Math.floor(shot / PAGE_SHOTS);
    if (pageNumber !== entry.pageNumber) turnTo(entry, pageNumber);
    const bit = shot - pageNumber * PAGE_SHOTS;
    const mask = 1 << (bit & 31);
    if ((entry.page[bit >>> 5] & mask) !== 0) return false;
    entry.page[bit >>> 5] |= mask;
    entry.count++;
    this.size++;
    return true;
  }

  /** Enters a shot without a number and returns its position within its time. */
  addNext(time_us: number): number {
    this.size++;
    return this.entryAt(time_us).count++;
  }

  private entryAt(time_us: number): TimeEntry {
    if (time_us === this.time_us) return this.entry;
    this.time_us = time_us;
    this.entry = this.times.get(time_us) ?? emptyEntry();
    this.times.set(time_us, this.entry);
    return this.entry;
  }
}

function emptyEntry(): TimeEntry {
  return { count: 0, pages: new Map(), page: new Uint32Array(0), pageNumber: -1 };
}

function turnTo(entry: TimeEntry, pageNumber: number): void {
  entry.page = entry.pages.get(pageNumber) ?? new Uint32Array(PAGE_SHOTS / 32);
  entry.pages.set(pageNumber, entry.page);
  entry.pageNumber = pageNumber;
}
