// When the page is drawn: what the reader looks at before the next frame is due, the rest once nothing more comes.

export interface Paces {
  /** Everything, with the browser's next frame: the reader did something on the page. */
  frame(): void;
  /** What is in sight, as soon as the messages that are here have been read. */
  sight(): void;
  /** Everything, after a pause: it must not hold up a hand on a slider. */
  rest(): void;
}

/** The rest waits for so long a pause, and at most so long while there is none. */
const pauseMs = 40, mostMs = 300;
/** Two drawings nearer to each other than this would be for one frame. */
const apartMs = 6;

export function paces(draw: (only: "sight" | "all") => void): Paces {
  const { port1, port2 } = new MessageChannel();
  let posted = false, frame = 0, timer = 0, since = 0, drawnAt = 0;
  const all = (): void => { cancelAnimationFrame(frame); clearTimeout(timer); frame = timer = 0; drawnAt = performance.now(); draw("all"); };
  const sight = (): void => { drawnAt = performance.now(); draw("sight"); };
  port1.addEventListener("message", () => {
    posted = false;
    if (performance.now() - drawnAt >= apartMs) sight(); else requestAnimationFrame(sight);
  });
  port1.start();
  return {
    frame() { if (frame === 0) frame = requestAnimationFrame(all); },
    sight() { if (!posted) { posted = true; port2.postMessage(null); } },
    rest() {
      const now = performance.now();
      if (timer === 0) since = now; else clearTimeout(timer);
      timer = window.setTimeout(all, Math.min(pauseMs, Math.max(0, since + mostMs - now)));
    },
  };
}
