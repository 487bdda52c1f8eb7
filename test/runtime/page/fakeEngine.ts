// A worker that speaks like the engine, with figures made up from the settings: the page is tried against it alone.
/// <reference lib="webworker" />

import { fakeNotebook } from "./fakeNotebook.ts";
import type { FromEngine, ToEngine } from "../../../runtime/engine/messages.ts";

const post = (message: FromEngine): void => { (self as unknown as Worker).postMessage(message, []); };
const fake = fakeNotebook();

self.addEventListener("message", (event: MessageEvent) => {
  const message = event.data as ToEngine;
  if (message.to === "ping") { post({ from: "pong", beat: message.beat, running: null }); return; }
  if (message.to === "set" && message.name === "loop") {
    // A cell that never ends: it says that it is at work, and then the worker is lost.
    for (const said of fake.looping()) post(said);
    const from = Date.now();
    while (Date.now() - from < 3_600_000) { /* on purpose */ }
  }
  for (const said of fake.answer(message)) post(said);
});
