/** Returns the text of kernel-bytes.generated.ts as the kernel source compiles now. */
export function kernelModule(): Promise<string>;
