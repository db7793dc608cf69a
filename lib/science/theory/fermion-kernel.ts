import { KERNEL_BYTES } from "@/lib/science/theory/kernel-bytes.generated";

/** The compiled updates of a fermion state's window; arguments named like memory are byte offsets into its own memory. */
export interface FermionKernel {
  memory: WebAssembly.Memory;
  conditionDeterminant(from: number, to: number, column: number, width: number, held: number, factor: number): void;
  conditionMajorana(from: number, to: number, first: number, second: number, width: number, held: number, factor: number): void;
}

const PAGE_BYTES = 65536;

let instance: FermionKernel | null = null;

/**
 * Returns the thread's kernel with at least `bytes` of memory. Every caller writes what it reads, so nothing of an
 * earlier use shows; views of the memory made before are void.
 */
export function fermionKernel(bytes: number): FermionKernel {
  instance ??= instantiate();
  const missing = bytes - instance.memory.buffer.byteLength;
  if (missing > 0) instance.memory.grow(Math.ceil(missing / PAGE_BYTES));
  return instance;
}

function instantiate(): FermionKernel {
  const bytes = Uint8Array.from(atob(KERNEL_BYTES), (letter) => letter.charCodeAt(0));
  const { exports } = new WebAssembly.Instance(new WebAssembly.Module(bytes));
  if (!isKernel(exports)) throw new Error("The compiled fermion kernel lacks its functions: run npm run kernel");
  return exports;
}

function isKernel(exports: object): exports is FermionKernel {
  return "memory" in exports && "conditionDeterminant" in exports && "conditionMajorana" in exports;
}
