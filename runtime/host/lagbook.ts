// The command itself: `run` with a real process around it.

import { run } from "./run.ts";

const stop = new AbortController();
// `open` ends in order on Ctrl-C. The others are at work without a pause: the signal itself ends them.
if (process.argv[2] === "open") for (const signal of ["SIGINT", "SIGTERM"] as const) process.once(signal, () => stop.abort());
// A reader that closes early ("| head") is no error.
process.stdout.on("error", (error: NodeJS.ErrnoException) => { if (error.code !== "EPIPE") throw error; });

process.exitCode = await run(process.argv.slice(2), {
  out: (text) => { process.stdout.write(text); },
  error: (text) => { process.stderr.write(text); },
  cwd: process.cwd(), now: () => new Date(), stop: stop.signal,
});
