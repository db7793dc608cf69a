import { existsSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import path from "node:path";

/**
 * Takes the data directory for this process and returns a function that gives it back. Throws when another start holds it:
 * two would end each other's database. What a crashed start left behind is taken over.
 */
export function holdDataDirectory(dataDirectory) {
  const file = path.join(dataDirectory, "start.pid");
  const mine = `${process.pid} ${bootTicks(process.pid)}`;
  if (!write(file, mine)) {
    const [pid, ticks] = readFileSync(file, "utf8").split(" ");
    if (ticks !== undefined && bootTicks(pid) === ticks) throw new Error(`it runs already over ${dataDirectory} (process ${pid}); end that one first, or set STRANDLINE_DATA and PORT`);
    rmSync(file);
    if (!write(file, mine)) throw new Error(`another start over ${dataDirectory} was quicker`);
  }
  return () => rmSync(file, { force: true });
}

function write(file, text) {
  try {
    writeFileSync(file, text, { flag: "wx" });
    return true;
  } catch (error) {
    if (error.code === "EEXIST") return false;
    throw error;
  }
}

/** When a living process began, in clock ticks since boot: a process number alone may have been given out again. */
function bootTicks(pid) {
  const file = `/proc/${pid}/stat`;
  if (!existsSync(file)) return "ended";
  const afterName = readFileSync(file, "utf8").split(") ").at(-1).split(" ");
  return afterName[0] === "Z" ? "ended" : afterName[19];
}
