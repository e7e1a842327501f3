import { endAll } from './supervise.mjs';

/**
 * From now on SIGINT, SIGTERM and SIGHUP end all that was started, and then us. So does the end of the npm that
 * started us: if it is killed it cannot tell.
 *
 * @param {(signal: string) => number} codeOf our exit code after a signal; an ordered stop is no failure
 */
export function onStop(codeOf = () => 0) {
  const after = [];
  let ended = null;
  const end = (code, before = () => undefined) => {
    ended ??= (async () => {
      before();
      await endAll();
      for (const work of after.reverse()) await work();
      process.exit(code);
    })();
    return ended;
  };
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) process.on(signal, () => end(codeOf(signal)));
  const parent = process.ppid;
  if (process.env.npm_lifecycle_event) setInterval(() => process.ppid === parent || end(1), 1000).unref();
  return {
    /** Ends all after a failure; while a stop is under way what fails because of it is not shown. */
    fail: (show) => end(1, show),
    /** Ends all, then us, with this code. */
    end: (code) => end(code),
    /** Work for the very end. */
    lastly: (work) => after.push(work),
  };
}
