import { KERNEL_BYTES } from "@/lib/science/correlators/kernel-bytes.generated";

/**
 * The compiled bootstrap (source in kernel/, built by `npm run kernel`). Arguments named like memory are byte offsets
 * into its own memory; see the source for what each function reads and writes.
 */
export interface BootstrapKernel {
  memory: WebAssembly.Memory;
  drawMultiplicities(
    weights: number,
    shots: number,
    block: number,
    time: number,
    purpose: number,
    repairPurpose: number,
    key0: number,
    key1: number,
    fineTable: number,
    scratch: number,
  ): void;
  drawRuns(
    weights: number,
    shots: number,
    length: number,
    block: number,
    time: number,
    purpose: number,
    key0: number,
    key1: number,
    scratch: number,
  ): void;
  readGroup(words: number, wordsPerSite: number, shots: number, nibbles: number): void;
  listPatterns(
    a: number,
    b: number,
    first: number,
    end: number,
    weights: number,
    emptyRow: number,
    list: number,
    scratch: number,
  ): void;
  sumPatterns(list: number, sums: number): void;
  countJointly(
    sums: number,
    pairRows: number,
    ownRows: number,
    rowBytes: number,
    block: number,
    keep: number,
    scratch: number,
  ): void;
  correlate(
    both: number,
    countI: number,
    countJ: number,
    factorI: number,
    factorJ: number,
    shots: number,
    scale: number,
    replicates: number,
    out: number,
  ): void;
  average(count: number, factor: number, offset: number, shots: number, replicates: number, out: number): void;
  addShare(values: number, share: number, replicates: number, target: number): void;
  spread(values: number, replicates: number): number;
  countBelow(values: number, replicates: number, limit: number): number;
  sortIntoBins(values: number, replicates: number, bins: number, sizes: number): void;
  quantile(values: number, replicates: number, bins: number, sizes: number, p: number, scratch: number): number;
}

const PAGE_BYTES = 65536;

let instance: BootstrapKernel | null = null;

/**
 * Returns the thread's kernel with at least `bytes` of memory. Every caller writes what it reads, so nothing of an
 * earlier use shows; views of the memory made before are void.
 */
export function bootstrapKernel(bytes: number): BootstrapKernel {
  instance ??= instantiate();
  const missing = bytes - instance.memory.buffer.byteLength;
  if (missing > 0) instance.memory.grow(Math.ceil(missing / PAGE_BYTES));
  return instance;
}

function instantiate(): BootstrapKernel {
  const bytes = Uint8Array.from(atob(KERNEL_BYTES), (letter) => letter.charCodeAt(0));
  const { exports } = new WebAssembly.Instance(new WebAssembly.Module(bytes));
  if (!isKernel(exports)) throw new Error("The compiled bootstrap kernel lacks its functions: run npm run kernel");
  return exports;
}

function isKernel(exports: object): exports is BootstrapKernel {
  return "memory" in exports && "drawMultiplicities" in exports && "quantile" in exports;
}
