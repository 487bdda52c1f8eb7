// How long counted work will still take, from how fast it went of late.

/** Counts this close together say nothing of the pace; what was remembered from before comes all at once and is not counted either. */
const sampleMs = 250;
/** The pace is that of the last so many samples: work may be heavier later on. */
const samplesKept = 40;

/** One for each run of a cell. @param clock milliseconds
 *  @returns milliseconds left at a count, or null as long as nothing can be said */
export function createTimeLeft(clock: () => number = () => performance.now()): (done: number, total: number) => number | null {
  const started = clock();
  const samples: { readonly at: number; readonly done: number }[] = [];
  return (done, total) => {
    const now = clock();
    if (now - (samples.at(-1)?.at ?? started) >= sampleMs) {
      samples.push({ at: now, done });
      if (samples.length > samplesKept) samples.shift();
    }
    const [first] = samples;
    if (first === undefined || total <= 0 || done <= first.done || now - first.at < sampleMs) return null;
    return ((now - first.at) / (done - first.done)) * Math.max(0, total - done);
  };
}
