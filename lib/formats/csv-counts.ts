import { walkCountRows } from "@/lib/formats/count-rows";
import { surveyCounts } from "@/lib/formats/count-survey";
import { openAssembly } from "@/lib/formats/shot-assembly";
import type { ShotReader } from "@/lib/formats/shot-batch";
import { invalidAt, isProblem } from "@/lib/problem";

/**
 * Reads delimited text with one row a count (time, shot, site, count), plain or gzipped, rows in any order; a site
 * without a row is missing. It reads the file twice, as the sites are known only at its end; memory is constant when
 * the rows of each shot stand together.
 */
export const readCsvCounts: ShotReader = async function* (source, options) {
  const survey = await surveyCounts(source, options);
  if (isProblem(survey)) return survey;
  if (survey.shots === 0) return invalidAt("file", "holds no counts");
  const assembly = openAssembly(survey, options);
  if (isProblem(assembly)) return assembly;
  for await (const trouble of walkCountRows(source, options, (row) => assembly.take(row))) {
    if (trouble !== null) return trouble;
    yield* assembly.builder.takeReady();
  }
  assembly.close();
  const trouble = assembly.builder.finish();
  if (trouble !== null) return trouble;
  yield* assembly.builder.takeReady();
  return { format: "csv-counts", siteNames: survey.siteNames, positions: null };
};
