import { existsSync, readFileSync } from "node:fs";
import { afterAll, expect, it } from "vitest";
import { endCommands, runCommand } from "../../scripts/start/commands.mjs";

afterAll(endCommands);

/** A process that has ended but that nobody has asked about yet is a zombie, not alive. */
const isAlive = (pid: number) => existsSync(`/proc/${pid}/stat`) && !/\) Z /.test(readFileSync(`/proc/${pid}/stat`, "utf8"));

it("returns what a command printed", async () => {
  expect(await runCommand("sh", ["-c", "echo one; echo two"], { name: "counting" })).toBe("one\ntwo\n");
});

it("names a command that failed, with the end of what it said", async () => {
  const failing = runCommand("sh", ["-c", "echo the reason >&2; exit 3"], { name: "the attempt" });
  await expect(failing).rejects.toThrow(/the attempt failed with code 3\n[\s\S]*the reason/);
});

it("names a command that is not there", async () => {
  await expect(runCommand("no-such-program-here", [], { name: "the absent one" })).rejects.toThrow(/the absent one failed: .*ENOENT/);
});

it("at the end, breaks off a command with its children, waits for one that may finish, and begins no other", async () => {
  const broken = runCommand("sh", ["-c", "sleep 60 & echo $! >&2; wait"], { name: "the long one" });
  const finishing = runCommand("sh", ["-c", "sleep 0.4; echo done"], { name: "the careful one", mayFinish: true });
  const outcome = Promise.allSettled([broken, finishing]);
  await new Promise((resolve) => setTimeout(resolve, 150));
  await endCommands();
  const [first, second] = await outcome;
  expect(first.status).toBe("rejected");
  const child = Number(/\n\s*(\d+)\s*$/.exec(String(first.status === "rejected" && first.reason.message))?.[1]);
  expect(child).toBeGreaterThan(1);
  expect(isAlive(child)).toBe(false);
  expect(second).toEqual({ status: "fulfilled", value: "done\n" });
  await expect(runCommand("true", [], { name: "another" })).rejects.toThrow("another was not begun");
});
