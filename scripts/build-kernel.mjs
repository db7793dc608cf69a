/**
 * `npm run kernel`: compiles the bootstrap kernel from AssemblyScript and writes its bytes as a module, so that it loads
 * synchronously in Node, in worker threads and in browsers alike.
 */
import { readFile, writeFile } from "node:fs/promises";
import { fileURLToPath } from "node:url";
import asc from "assemblyscript/asc";

const root = fileURLToPath(new URL("..", import.meta.url));
const source = "lib/science/correlators/kernel/index.ts";
const target = "lib/science/correlators/kernel-bytes.generated.ts";
const options = ["-O3", "--noAssert", "--runtime", "stub", "--enable", "simd"];

/** Returns the text of the generated module. Throws with the compiler's words when the source does not compile. */
export async function kernelModule() {
  let wasm = null;
  const { error, stderr } = await asc.main([source, "--baseDir", root, "--outFile", "kernel.wasm", ...options], {
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
  const text = await kernelModule();
  await writeFile(`${root}/${target}`, text);
  console.log(`${target}: ${text.length} characters`);
}
