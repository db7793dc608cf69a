/** Returns the text of a room's kernel-bytes.generated.ts as its kernel source compiles now. */
export function kernelModule(room: string): Promise<string>;
