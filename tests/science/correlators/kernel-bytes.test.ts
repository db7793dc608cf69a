import { readFileSync } from "node:fs";
import { expect, it } from "vitest";
import { kernelModule } from "@/scripts/build-kernel.mjs";

it.each(["lib/science/correlators", "lib/science/theory", "lib/science/threshold-free"])("the committed kernel of %s is what its source compiles to", async (room) => {
  const committed = readFileSync(`${room}/kernel-bytes.generated.ts`, "utf8");
  expect(await kernelModule(room)).toBe(committed);
});
