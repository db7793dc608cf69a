import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { PageQuery, pageOf } from "@/lib/http/page-query";

const row = fc.record({
  createdAt: fc.integer({ min: 0, max: 4e12 }).map((time) => new Date(time)),
  id: fc.array(fc.integer({ min: 0, max: 15 }), { minLength: 24, maxLength: 24 }).map((digits) => digits.map((digit) => digit.toString(16)).join("")),
});

describe("a page", () => {
  it("ends in a cursor that names its last row", () => {
    fc.assert(
      fc.property(fc.array(row, { minLength: 2, maxLength: 6 }), (rows) => {
        const { items, nextCursor } = pageOf(rows, rows.length - 1, ({ id }) => id);
        expect(items).toEqual(rows.slice(0, -1).map(({ id }) => id));
        expect(PageQuery.parse({ cursor: nextCursor }).cursor).toEqual(rows.at(-2));
      }),
    );
  });

  it("is the last one when no row is left over", () => {
    expect(pageOf([], 5, String)).toEqual({ items: [], nextCursor: null });
  });
});

describe("the query of a list", () => {
  it("asks for 50 rows from the start unless said otherwise", () => {
    expect(PageQuery.parse({})).toEqual({ limit: 50 });
  });

  it.each([{ limit: "0" }, { limit: "201" }, { limit: "1.5" }, { limit: "" }, { cursor: "" }, { cursor: "AAAA" }])("refuses %j", (query) => {
    expect(PageQuery.safeParse(query).success).toBe(false);
  });

  it("does not choke on any cursor", () => {
    fc.assert(fc.property(fc.string(), (cursor) => void PageQuery.safeParse({ cursor })));
  });
});
