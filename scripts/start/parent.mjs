const LOOK_EVERY_MS = 500;

/** Calls back when npm, having started this process, is gone: npm hands a SIGTERM to its shell only, not to us. */
export function whenNpmEnds(callback) {
  if (!process.env.npm_lifecycle_event) return;
  const parent = process.ppid;
  const timer = setInterval(() => {
    if (process.ppid === parent) return;
    clearInterval(timer);
    callback();
  }, LOOK_EVERY_MS);
  timer.unref();
}
