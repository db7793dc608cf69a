import { clopperPearson } from "@/lib/science/stats/intervals";
import { coverageText, percent, type CoverageTally } from "@/scripts/study/coverage-tally";
import { FRONT_CELLS, type FrontCell } from "@/scripts/study/front-cells";
import { METHODS, type FrontTally, type MethodTally } from "@/scripts/study/front-coverage";

/** Returns the front study as a Markdown table, one row a cell and crossing method. */
export function frontTable(tallies: readonly FrontTally[]): string {
  const rows = FRONT_CELLS.flatMap((cell, at) => METHODS.map((method) => `| ${methodRow(cell, method, tallies[at][method]).join(" | ")} |`));
  return [
    "| truth | M | method | true γ | bias of γ | RMS of γ | τ | γ and β | γ, basic | v | “faster” | “slower” | no fit |",
    "|---|---|---|---|---|---|---|---|---|---|---|---|---|",
    ...rows,
  ].join("\n");
}

function methodRow({ name, shots }: FrontCell, method: string, tally: MethodTally): (string | number)[] {
  const { trueGamma, crossings, gamma, gammaBasic, velocity, fasterThanLinear, slowerThanLinear, noFit, repeats } = tally;
  const coverages = [crossings, gamma, gammaBasic, velocity].map(coverageText);
  const shares = [fasterThanLinear, slowerThanLinear, noFit].map((count) => shareText(count, repeats));
  return [name, shots, method, trueGamma?.toFixed(3) ?? "–", biasText(gamma), rmsText(gamma), ...coverages, ...shares];
}

function biasText({ sum, intervals }: CoverageTally): string {
  return intervals === 0 ? "–" : (sum / intervals).toFixed(3);
}

function rmsText({ squares, intervals }: CoverageTally): string {
  return intervals === 0 ? "–" : Math.sqrt(squares / intervals).toFixed(3);
}

/** A share in per cent with its 95 % limits (Clopper and Pearson 1934). */
function shareText(count: number, of: number): string {
  const [low, high] = clopperPearson(count, of);
  return `${percent(count / of)} (${percent(low)}–${percent(high)})`;
}
