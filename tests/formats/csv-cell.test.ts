import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { csvComment, csvNumber, csvText } from "@/lib/formats/csv-cell";

/** The cells a spreadsheet makes of a line, with either separator, quotes as in RFC 4180. */
function cellsOf(line: string): string[] {
  return [",", ";", "\t"].flatMap((separator) => {
    const cells: string[] = [];
    let cell = "";
    let quoted = false;
    for (const sign of line) {
      if (sign === '"' && (quoted || cell === "")) quoted = !quoted;
      else if (sign === separator && !quoted) {
        cells.push(cell);
        cell = "";
      } else cell += sign;
    }
    return [...cells, cell];
  });
}

describe("a text in a CSV file", () => {
  it.each([
    ["=1+1", "'=1+1"],
    ["-5", "'-5"],
    ["@sum", "'@sum"],
    ["site 3", "site 3"],
    ['say "hi"', '"say ""hi"""'],
    ["a,b", '"a,b"'],
    ["=a;b", '"\'=a;b"'],
  ])("%j becomes the cell %s", (text, cell) => {
    expect(csvText(text)).toBe(cell);
  });

  it("runs nowhere as a formula from a comment line, whichever sign separates the cells", () => {
    const piece = fc.constantFrom("=", "+", "-", "@", ",", ";", "\t", '"', " ", "a", "1");
    fc.assert(
      fc.property(fc.array(piece, { maxLength: 12 }), (pieces) => {
        for (const cell of cellsOf(csvComment(`run: ${pieces.join("")}`))) expect(cell.trimStart()).not.toMatch(/^[=+\-@]/);
      }),
    );
  });

  it("stays as it is in a comment line when no cell of it would run", () => {
    expect(csvComment("run: night 12, t = 5 (a-b)")).toBe("# run: night 12, t = 5 (a-b)");
  });
});

describe("a number in a CSV file", () => {
  it("has all its digits, and is empty where there is none", () => {
    expect([0.1 + 0.2, -1e-300, null, Number.NaN].map(csvNumber)).toEqual(["0.30000000000000004", "-1e-300", "", ""]);
  });
});
