import { describe, expect, it } from "vitest";
import { csvNumber, csvText } from "@/lib/formats/csv-cell";
import { memorySource } from "@/lib/formats/memory-source";
import { isProblem } from "@/lib/problem";
import { readAll, readGood, refusals } from "./read-all";

const text = (content: string): ReturnType<typeof memorySource> => memorySource(Buffer.from(content), 5);

describe("tables with one row a shot", () => {
  it("numbers shots by their position within their time when the file does not", async () => {
    const { shots } = await readGood(text("time,a\n5,1\n10,2\n5,3\n"));
    expect(shots.map(({ time_us, shot }) => [time_us, shot])).toEqual([[5, 0], [10, 0], [5, 1]]);
  });

  it.each([["time_us", 2.5], ["time", 2.5], ["time_ms", 2500], ["time_s", 2_500_000]])("takes times in %s", async (name, time_us) => {
    expect((await readGood(text(`${name}\ta\n2.5\t1\n`))).shots[0].time_us).toBe(time_us);
  });

  it("takes site names that hold separators, quotes or nothing unusual, twice the same too", async () => {
    const { summary } = await readGood(text('"left, upper";time_us;"a ""b""";x;x\n1;5;2;3;4\n'));
    expect(summary.siteNames).toEqual(["left, upper", 'a "b"', "x", "x"]);
  });

  it("counts lines with comments and blank lines in", async () => {
    expect(await refusals(text("# made at night\n\ntime_us,a\n# here\n5,x\n"))).toEqual(["shots.csv line 5 column a"]);
  });

  it("switches to float32 at the first fraction and keeps what came before as whole counts", async () => {
    const { batches } = await readGood(text("time_us,a,b\n5,1,\n5,2.5,\n5,3,4\n"));
    expect(batches.map(({ counts }) => counts.constructor.name)).toEqual(["Uint16Array", "Float32Array"]);
    expect(batches.map(({ counts }) => Array.from(counts))).toEqual([[1, 0], [2.5, NaN, 3, 4]]);
    expect(batches.map(({ missing }) => Array.from(missing))).toEqual([[1], [1, 0]]);
  });

  it("judges a negative whole count only when the file has shown whether it has fractions, wherever they stand", async () => {
    expect(await refusals(text("time_us,a\n5,1\n5,-2\n5,-3\n"))).toEqual(["shots.csv line 3 column a"]);
    expect((await readGood(text("time_us,a\n5,-2\n5,0.5\n"))).shots.map(({ counts }) => counts)).toEqual([[-2], [0.5]]);
    expect((await readGood(text("time_us,a\n5,0.5\n5,-2\n"))).shots.map(({ counts }) => counts)).toEqual([[0.5], [-2]]);
  });

  it("takes whole counts written with a point or an exponent as whole", async () => {
    const { batches } = await readGood(text("time_us,a,b\n5,3.0,1e2\n"));
    expect(batches[0].counts).toEqual(Uint16Array.of(3, 100));
  });

  it.each([
    ["time_us,shot\n5,1\n", "shots.csv header"],
    ["time_us,time_ms,a\n5,5,1\n", "shots.csv header"],
    ["time_us,a,\n5,1,2\n", "shots.csv header"],
    ["time_us,shot,a\n5,1.5,2\n", "shots.csv line 2 column shot"],
    ["time_us,shot,a\n5,-1,2\n", "shots.csv line 2 column shot"],
    ["time_us,a\n,2\n", "shots.csv line 2 column time_us"],
    ['time_us,a\n5,"2\n', "shots.csv line 2"],
    ["time_us\ta\n5\t2,5\n", "shots.csv line 2 column a"],
    ["time_us,a\n5,1e39\n", "shots.csv line 2 column a"],
    ["# nothing\n\n", "file"],
    ["time_us,site,count\n5,0,3\n5,1,4\n", "shots.csv header"],
    ["time_us,shot,site,count,gate\n5,0,0,3,1\n", "shots.csv header"],
  ])("refuses %j at %s", async (content, where) => {
    expect(await refusals(text(content))).toEqual([where]);
  });

  it("needs no time column for calibration shots", async () => {
    const { shots } = await readGood(text("a,b\n1,2\n"), { role: "calibration-bright" });
    expect(shots).toEqual([{ role: "calibration-bright", time_us: NaN, shot: 0, counts: [1, 2], missing: false }]);
  });

  it("refuses an endless line instead of holding it", async () => {
    expect(await refusals(memorySource(Buffer.from(`time_us,a\n${"5".repeat(3e6)}`)))).toEqual(["file"]);
  });

  it("passes a failing source on as what it is, not as a fault of the file", async () => {
    const broken = { ...text("time_us,a\n5,1\n"), read: async () => { throw new Error("disk"); } };
    await expect(readAll(broken)).rejects.toThrow("disk");
  });
});

describe("tables with one row a count", () => {
  it("puts the counts of a shot together, orders numbered sites by number, and leaves out none", async () => {
    const { summary, shots } = await readGood(text("site,count,time_us,shot\n10,1,5,0\n2,7,5,0\n2,8,5,1\n10,9,5,1\n"));
    expect(summary).toMatchObject({ format: "csv-counts", siteNames: ["2", "10"] });
    expect(shots.map(({ counts }) => counts)).toEqual([[7, 1], [8, 9]]);
  });

  it("keeps named sites in the order of their first rows, and a site without a row is missing", async () => {
    const { summary, shots } = await readGood(text("time_us,shot,site,count\n5,0,right,1\n5,0,left,2\n5,1,left,3\n"));
    expect(summary.siteNames).toEqual(["right", "left"]);
    expect(shots.map(({ counts, missing }) => [counts, missing])).toEqual([[[1, 2], false], [[null, 3], true]]);
  });

  it("takes a site for the same however its number is written", async () => {
    const { summary, shots } = await readGood(text('time_us,shot,site,count\n5,0,0,1\n5,0,"1",2\n5,1,"0",3\n5,1,1.0,4\n5,2, 0,5\n5,2,01,6\n'));
    expect(summary.siteNames).toEqual(["0", "1"]);
    expect(shots.map(({ counts }) => counts)).toEqual([[1, 2], [3, 4], [5, 6]]);
    expect(await refusals(text('time_us,shot,site,count\n5,0,1,1\n5,0,1.0,2\n'))).toEqual(["shots.csv line 3"]);
  });

  it.each([
    ["5,0,1,1\n5,0,1,2\n", "shots.csv line 3"],
    ["5,0,1,1\n5,1,1,1\n5,0,1,2\n", "shots.csv line 4"],
    ["5,0,1,1\n5,0,2,-2\n", "shots.csv line 3 column count"],
    ["5,1,1,1\n5,0,2,2\n5,1,2,-2\n", "shots.csv line 4 column count"],
    ["5,0,,1\n", "shots.csv line 2 column site"],
    ["5,0,1\n", "shots.csv line 2"],
    ["", "file"],
  ])("refuses %j at %s", async (rows, where) => {
    expect(await refusals(text(`time_us,shot,site,count\n${rows}`))).toEqual([where]);
  });

  it("refuses scattered rows that would need unbounded memory, with advice", async () => {
    const rows = Array.from({ length: 40_000 }, (_, n) => `5,${n % 2 ? n : n + 1e6},${n % 4000},1`);
    const scattered = [...rows, "5,1,2,1"].join("\n");
    const answer = await readAll(memorySource(Buffer.from(`time_us,shot,site,count\n${scattered}\n`)));
    expect(isProblem(answer) && [answer.code, answer.detail]).toEqual(["too-large", expect.stringContaining("sort the rows")]);
  });
});

describe("cells for export", () => {
  it.each([["=1+1", "'=1+1"], ["+a", "'+a"], ["-a", "'-a"], ["@a", "'@a"], ["\ta", "\"'\ta\""], ["\ra", "\"'\ra\""], ["a,b", '"a,b"'], ['a"b', '"a""b"'], ["site_1", "site_1"]])(
    "writes %j as %j",
    (raw, cell) => expect(csvText(raw)).toBe(cell),
  );

  it("writes numbers with all digits, negative ones as numbers, and nothing for none", () => {
    expect([-0.1, 1 / 3, null, NaN].map(csvNumber)).toEqual(["-0.1", "0.3333333333333333", "", ""]);
  });
});
