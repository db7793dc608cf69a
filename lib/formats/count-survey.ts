import { walkCountRows, type CountRow } from "@/lib/formats/count-rows";
import { decimalNumber } from "@/lib/formats/decimal-text";
import type { ByteSource, ReadOptions } from "@/lib/formats/shot-batch";
import { ShotNumberRegister } from "@/lib/formats/shot-number-register";
import { invalidAt, type Problem } from "@/lib/problem";

const MOST_SITES = 4096;

/** What must be known of a table with one row a count before its first shot can be told. */
export interface CountSurvey {
  siteNames: string[];
  /** From a site as the rows name it to its index. */
  siteIndex: Map<string | number, number>;
  shots: number;
  /** Whether the rows of each shot stand together, so that one shot at a time is enough. */
  together: boolean;
}

/** Reads the table once for its sites, its shots and the order of its rows. */
export async function surveyCounts(source: ByteSource, options: ReadOptions): Promise<CountSurvey | Problem> {
  const sites = new Set<string | number>();
  const register = new ShotNumberRegister();
  let together = true;
  let time_us = NaN;
  let shot = NaN;
  const take = (row: CountRow): Problem | null => {
    sites.add(row.site);
    if (sites.size > MOST_SITES) return invalidAt(row.line(), `more than ${MOST_SITES} sites`);
    if (row.time_us === time_us && row.shot === shot) return null;
    time_us = row.time_us;
    shot = row.shot;
    if (!register.add(time_us, shot)) together = false;
    return null;
  };
  for await (const trouble of walkCountRows(source, options, take)) if (trouble !== null) return trouble;
  const ordered = inOrder([...sites]);
  const siteIndex = new Map(ordered.map((site, index) => [site, index]));
  return { siteNames: ordered.map(String), siteIndex, shots: register.size, together };
}

/** Sorts by number when every site is one, else keeps the order of first appearance. */
function inOrder(sites: (string | number)[]): (string | number)[] {
  const numbers = sites.map((site) => (typeof site === "number" ? site : decimalNumber(site)));
  if (numbers.includes(null)) return sites;
  return sites.map((site, index) => ({ site, number: numbers[index] ?? 0 })).sort((a, b) => a.number - b.number).map(({ site }) => site);
}
