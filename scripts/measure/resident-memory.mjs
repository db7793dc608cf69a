import { readFileSync } from "node:fs";

const EVERY_MS = 100;
const MIB = 1024 * 1024;

/** Returns the resident memory of a process in bytes. */
export function residentBytes(pid) {
  const [, kibibytes] = readFileSync(`/proc/${pid}/status`, "utf8").match(/^VmRSS:\s+(\d+) kB$/m);
  return 1024 * Number(kibibytes);
}

/** Looks at processes `{name: pid}` ten times a second until `stop`, which returns the highest resident memory of each in MiB. */
export function watchMemory(pids) {
  const peaks = Object.fromEntries(Object.entries(pids).map(([name, pid]) => [name, residentBytes(pid)]));
  const timer = setInterval(() => {
    for (const [name, pid] of Object.entries(pids)) peaks[name] = Math.max(peaks[name], residentBytes(pid));
  }, EVERY_MS);
  return {
    stop() {
      clearInterval(timer);
      return Object.fromEntries(Object.entries(peaks).map(([name, bytes]) => [name, Math.round(bytes / MIB)]));
    },
  };
}
