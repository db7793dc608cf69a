import packageJson from "@/package.json";

/** Recorded with every analysis: the program that made it. */
export const PROGRAM_VERSION: string = packageJson.version;
