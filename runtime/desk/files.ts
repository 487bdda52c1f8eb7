// The desk's side of its server: reading and saving the notebook, reading data files, hearing of changes on disk.

export interface Stored { readonly text: string; readonly hash: string }
export interface Opened extends Stored { readonly name: string; readonly path: string }

/** Written; or the file holds another text by now (null: it is gone). */
export type Saved = { readonly hash: string } | { readonly found: Stored | null };

export type FileEvent = { readonly event: "notebook"; readonly hash: string | null } | { readonly event: "file"; readonly file: string };

export interface Files {
  open(): Promise<Opened>;
  /** Writes the text if the file still has the hash `seen`; null: if it is not there. */
  save(text: string, seen: string | null): Promise<Saved>;
  /** The bytes of a data file, or the reason why there are none. */
  data(file: string): Promise<{ readonly bytes: Uint8Array } | { readonly reason: string }>;
  /** Hears of changes on disk; `connected` tells when the server is there and when it is lost. */
  follow(heard: (event: FileEvent) => void, connected: (there: boolean) => void): void;
}

export function serverFiles(key: string): Files {
  const headers = { "x-lagbook-key": key };
  return {
    async open() {
      const response = await fetch("/notebook", { headers });
      if (!response.ok) throw new Error(await messageOf(response));
      return await response.json() as Opened;
    },
    async save(text, seen) {
      const match: Record<string, string> = seen === null ? { "if-none-match": "*" } : { "if-match": `"${seen}"` };
      const response = await fetch("/notebook", { method: "PUT", headers: { ...headers, ...match, "content-type": "text/markdown" }, body: new TextEncoder().encode(text) });
      if (!response.ok && response.status !== 412) throw new Error(await messageOf(response));
      return await response.json() as Saved;
    },
    async data(file) {
      const response = await fetch(`/data?file=${encodeURIComponent(file)}`, { headers });
      return response.ok ? { bytes: new Uint8Array(await response.arrayBuffer()) } : { reason: await messageOf(response) };
    },
    follow(heard, connected) {
      const source = new EventSource(`/events?key=${encodeURIComponent(key)}`);
      source.addEventListener("open", () => connected(true));
      source.addEventListener("error", () => connected(false));
      source.addEventListener("message", (event: MessageEvent<string>) => heard(JSON.parse(event.data) as FileEvent));
    },
  };
}

async function messageOf(response: Response): Promise<string> {
  const text = await response.text();
  try {
    const { message } = JSON.parse(text) as { message?: string };
    return message ?? text;
  } catch {
    return text || `The server answered ${response.status}.`;
  }
}
