import { KERNEL_BYTES } from "@/lib/science/threshold-free/kernel-bytes.generated";

/** The compiled sums over resampled shots; arguments named like memory are byte offsets into its own memory. */
export interface WeightingKernel {
  memory: WebAssembly.Memory;
  addWeighted(weights: number, rows: number, shots: number, count: number, sums: number, scratch: number): void;
}

const PAGE_BYTES = 65536;

let instance: WeightingKernel | null = null;

/**
 * Returns the thread's kernel with at least `bytes` of memory. Every caller writes what it reads, so nothing of an
 * earlier use shows; views of the memory made before are void.
 */
export function weightingKernel(bytes: number): WeightingKernel {
  instance ??= instantiate();
  const missing = bytes - instance.memory.buffer.byteLength;
  if (missing > 0) instance.memory.grow(Math.ceil(missing / PAGE_BYTES));
  return instance;
}

function instantiate(): WeightingKernel {
  const bytes = Uint8Array.from(atob(KERNEL_BYTES), (letter) => letter.charCodeAt(0));
  const { exports } = new WebAssembly.Instance(new WebAssembly.Module(bytes));
  if (!isKernel(exports)) throw new Error("The compiled weighting kernel lacks its functions: run npm run kernel");
  return exports;
}

function isKernel(exports: object): exports is WeightingKernel {
  return "memory" in exports && "addWeighted" in exports;
}
