import { writeFileSync } from "node:fs";
import { demoFiles } from "./demo-runs";

for (const [name, bytes] of Object.entries(demoFiles())) {
  writeFileSync(`sample-data/${name}`, bytes);
  console.log(`${name} ${bytes.length} bytes`);
}
