import { readFileSync } from "node:fs";
import { expect, it } from "vitest";
import { kernelModule } from "@/scripts/build-kernel.mjs";

it("the committed kernel is what its source compiles to", async () => {
  const committed = readFileSync("lib/science/correlators/kernel-bytes.generated.ts", "utf8");
  expect(await kernelModule()).toBe(committed);
});
