import { describe, expect, it } from "vitest";
import { replaceMarked } from "@/scripts/study/marked-section";

const text = "a\n<!-- study:fronts -->\n\nold\n\n<!-- /study:fronts -->\nb\n";

describe("a marked section of a document", () => {
  it("is replaced between its marks, which stay, again and again", () => {
    const once = replaceMarked(text, "fronts", "new");
    expect(once).toBe("a\n<!-- study:fronts -->\n\nnew\n\n<!-- /study:fronts -->\nb\n");
    expect(replaceMarked(once ?? "", "fronts", "new")).toBe(once);
  });

  it("is not invented where the marks are missing", () => {
    expect(replaceMarked(text, "correlators", "new")).toBeNull();
    expect(replaceMarked("<!-- study:fronts -->", "fronts", "new")).toBeNull();
  });
});
