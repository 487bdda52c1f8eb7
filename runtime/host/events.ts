// What happened to the files, told to every open desk as a stream of server-sent events.

/** A change on disk. `hash` is null where the notebook is gone. */
export type FileEvent = { readonly event: "notebook"; readonly hash: string | null } | { readonly event: "file"; readonly file: string };

export class EventStreams {
  readonly #open = new Set<ReadableStreamDefaultController<Uint8Array>>();
  readonly #encoder = new TextEncoder();

  get count(): number { return this.#open.size; }

  send(event: FileEvent): void { this.#write(`data: ${JSON.stringify(event)}\n\n`); }

  /** A comment line now and then lets both ends notice a connection that is gone. */
  beat(): void { this.#write(": here\n\n"); }

  response(): Response {
    let own: ReadableStreamDefaultController<Uint8Array> | null = null;
    const stream = new ReadableStream<Uint8Array>({
      start: (controller) => {
        own = controller;
        this.#open.add(controller);
        controller.enqueue(this.#encoder.encode("retry: 1000\n\n: here\n\n"));
      },
      cancel: () => { if (own) this.#open.delete(own); },
    });
    return new Response(stream, { headers: { "content-type": "text/event-stream", "cache-control": "no-store" } });
  }

  close(): void {
    for (const controller of this.#open) controller.close();
    this.#open.clear();
  }

  #write(text: string): void {
    const bytes = this.#encoder.encode(text);
    for (const controller of this.#open) controller.enqueue(bytes);
  }
}
