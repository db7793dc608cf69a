export interface PrivateDatabase {
  name: string;
  log: string;
  start(password: string, whenItEnds: (code: number | null, signal: string | null) => void): Promise<string>;
  stop(): Promise<void>;
}

export const DATABASE_PACKAGES: { program: string; name: string }[];
export function privateDatabase(dataDirectory: string): PrivateDatabase;
export function freePort(wish?: number): Promise<number>;
export function lastLines(file: string, count: number): string;
