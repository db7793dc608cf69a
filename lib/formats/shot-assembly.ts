import { BatchBuilder } from "@/lib/formats/batch-builder";
import type { CountRow } from "@/lib/formats/count-rows";
import type { CountSurvey } from "@/lib/formats/count-survey";
import type { ReadOptions } from "@/lib/formats/shot-batch";
import { invalidAt, problem, type Problem } from "@/lib/problem";

const MOST_HELD_BYTES = 536_870_912;

/** Puts single counts together to shots; `close` hands over the shots still open. */
export interface ShotAssembly {
  builder: BatchBuilder;
  take(row: CountRow): Problem | null;
  close(): void;
}

/** Returns the assembly that the order of the rows needs, or a Problem when they would have to be held and are too many. */
export function openAssembly(survey: CountSurvey, options: ReadOptions): ShotAssembly | Problem {
  if (survey.together) return new OneShotAtATime(survey, options);
  if (8 * survey.shots * survey.siteNames.length <= MOST_HELD_BYTES) return new AllShotsAtOnce(survey, options);
  const message = "too many shots with scattered rows; sort the rows by time and shot";
  return problem("too-large", `file: ${message}`, [{ where: "file", message }]);
}

/** Assembly in constant memory, for rows that stand together by shot. */
class OneShotAtATime implements ShotAssembly {
  readonly builder: BatchBuilder;
  private readonly survey: CountSurvey;
  private readonly seen: Uint8Array;
  private readonly oddPlace = new FirstOddPlace();
  private time_us = NaN;
  private shot = NaN;

  constructor(survey: CountSurvey, options: ReadOptions) {
    this.survey = survey;
    this.seen = new Uint8Array(survey.siteNames.length);
    this.builder = new BatchBuilder(options.role, survey.siteNames.length, () => this.oddPlace.name);
    this.builder.row.fill(NaN);
  }

  take(row: CountRow): Problem | null {
    if (row.time_us !== this.time_us || row.shot !== this.shot) this.turnTo(row);
    const site = this.survey.siteIndex.get(row.site) ?? 0;
    if (this.seen[site] === 1) return givenTwice(row);
    this.seen[site] = 1;
    this.oddPlace.note(row);
    this.builder.row[site] = row.count;
    return null;
  }

  close(): void {
    if (!Number.isNaN(this.time_us)) this.builder.push(this.time_us, this.shot);
    this.builder.row.fill(NaN);
    this.seen.fill(0);
  }

  private turnTo(row: CountRow): void {
    this.close();
    this.time_us = row.time_us;
    this.shot = row.shot;
  }
}

/** Assembly of rows in any order: the counts are held until the end, shots in the order of their first rows. */
class AllShotsAtOnce implements ShotAssembly {
  readonly builder: BatchBuilder;
  private readonly survey: CountSurvey;
  /** `[shot][site]`, NaN where no row came. */
  private readonly counts: Float64Array;
  private readonly seen: Uint8Array;
  private readonly shots: { time_us: number; shot: number }[] = [];
  private readonly positions = new Map<number, Map<number, number>>();
  private readonly oddPlace = new FirstOddPlace();

  constructor(survey: CountSurvey, options: ReadOptions) {
    const sites = survey.siteNames.length;
    this.survey = survey;
    this.counts = new Float64Array(survey.shots * sites).fill(NaN);
    this.seen = new Uint8Array(survey.shots * sites);
    this.builder = new BatchBuilder(options.role, sites, () => this.oddPlace.name);
  }

  take(row: CountRow): Problem | null {
    const site = this.survey.siteIndex.get(row.site) ?? 0;
    const at = this.positionOf(row) * this.survey.siteNames.length + site;
    if (this.seen[at] === 1) return givenTwice(row);
    this.seen[at] = 1;
    this.oddPlace.note(row);
    this.counts[at] = row.count;
    return null;
  }

  close(): void {
    const sites = this.survey.siteNames.length;
    this.shots.forEach(({ time_us, shot }, position) => {
      this.builder.row.set(this.counts.subarray(position * sites, (position + 1) * sites));
      this.builder.push(time_us, shot);
    });
  }

  private positionOf({ time_us, shot }: CountRow): number {
    const atTime = this.positions.get(time_us) ?? new Map<number, number>();
    this.positions.set(time_us, atTime);
    const known = atTime.get(shot);
    if (known !== undefined) return known;
    const position = this.shots.push({ time_us, shot }) - 1;
    atTime.set(shot, position);
    return position;
  }
}

/** Keeps the place of the first whole count that only a file with fractions may hold: its shot is pushed later. */
class FirstOddPlace {
  name = "";

  note(row: CountRow): void {
    if (this.name === "" && Number.isInteger(row.count) && (row.count & 0xffff) !== row.count) this.name = row.countPlace();
  }
}

function givenTwice(row: CountRow): Problem {
  return invalidAt(row.line(), `site ${row.site} of shot ${row.shot} at ${row.time_us} µs is there twice`);
}
