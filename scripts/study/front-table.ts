import { clopperPearson } from "@/lib/science/stats/intervals";
import { coverageText, percent, type CoverageTally } from "@/scripts/study/coverage-tally";
import { FRONT_CELLS, type FrontCell } from "@/scripts/study/front-cells";
import { METHODS, type FrontTally, type MethodTally } from "@/scripts/study/front-coverage";

const KINDS = ["percentile", "basic", "normal"] as const;

/** Returns the front study as a Markdown table, one row a cell and crossing method. */
export function frontTable(tallies: readonly FrontTally[]): string {
  const rows = FRONT_CELLS.flatMap((cell, at) => METHODS.map((method) => `| ${methodRow(cell, method, tallies[at][method]).join(" | ")} |`));
  return [
    "| truth | M | method | true γ | bias of γ | RMS of γ | bias of v, % | τ | γ and β, percentile | basic | normal | v, percentile | basic | normal | “faster” | “faster”, normal | “slower” |",
    "|---|---|---|---|---|---|---|---|---|---|---|---|---|---|---|---|---|",
    ...rows,
  ].join("\n");
}

function methodRow({ name, shots }: FrontCell, method: string, tally: MethodTally): (string | number)[] {
  const { trueGamma, trueVelocity, crossings, gamma, velocity, fasterThanLinear, fasterByNormal, slowerThanLinear, repeats } = tally;
  const numbers = [trueGamma?.toFixed(3) ?? "–", biasText(gamma.percentile, 1), rmsText(gamma.percentile), biasText(velocity.percentile, 100 / (trueVelocity ?? NaN))];
  const coverages = [crossings, ...KINDS.map((kind) => gamma[kind]), ...KINDS.map((kind) => velocity[kind])].map(coverageText);
  const shares = [fasterThanLinear, fasterByNormal, slowerThanLinear].map((count) => shareText(count, repeats));
  return [name, shots, method, ...numbers, ...coverages, ...shares];
}

/** The mean of estimate − truth, times `scale`. */
function biasText({ sum, intervals }: CoverageTally, scale: number): string {
  return intervals === 0 ? "–" : ((scale * sum) / intervals).toFixed(scale === 1 ? 3 : 1);
}

function rmsText({ squares, intervals }: CoverageTally): string {
  return intervals === 0 ? "–" : Math.sqrt(squares / intervals).toFixed(3);
}

/** A share in per cent with its 95 % limits (Clopper and Pearson 1934). */
function shareText(count: number, of: number): string {
  const [low, high] = clopperPearson(count, of);
  return `${percent(count / of)} (${percent(low)}–${percent(high)})`;
}
