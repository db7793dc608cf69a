/**
 * `npm run kernel`: compiles the kernels from AssemblyScript and writes their bytes as modules, so that they load
 * synchronously in Node, in worker threads and in browsers alike.
 */
import { readFile, writeFile } from "node:fs/promises";
import { fileURLToPath } from "node:url";
import asc from "assemblyscript/asc";

const root = fileURLToPath(new URL("..", import.meta.url));
/** Each room's kernel/index.ts becomes its kernel-bytes.generated.ts. */
const rooms = ["lib/science/correlators", "lib/science/theory", "lib/science/threshold-free"];
const options = ["-O3", "--noAssert", "--runtime", "stub", "--enable", "simd"];

/** Returns the text of a room's generated module. Throws with the compiler's words when the source does not compile. */
export async function kernelModule(room) {
  let wasm = null;
  const { error, stderr } = await asc.main([`${room}/kernel/index.ts`, "--baseDir", root, "--outFile", "kernel.wasm", ...options], {
    readFile: (name, base) => readFile(`${base}/${name}`, "utf8").catch(() => null),
    writeFile: (name, contents) => {
      if (name === "kernel.wasm") wasm = contents;
    },
  });
  if (error || wasm === null) throw new Error(`${error?.message}\n${stderr.toString()}`);
  const text = Buffer.from(wasm).toString("base64");
  return `/** Compiled from kernel/ by \`npm run kernel\`; not edited by hand. */\nexport const KERNEL_BYTES =\n  "${text}";\n`;
}

if (process.argv[1] === fileURLToPath(import.meta.url)) {
  for (const room of rooms) {
    const text = await kernelModule(room);
    await writeFile(`${root}/${room}/kernel-bytes.generated.ts`, text);
    console.log(`${room}/kernel-bytes.generated.ts: ${text.length} characters`);
  }
}
