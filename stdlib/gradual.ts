// Long work in slices: who runs it decides what happens between them (nothing, or letting newer messages in).

export interface Progress { readonly done: number; readonly total: number; readonly what: string }

/** Work that says after each slice how far it is, and gives its result at the end. */
export type Gradual<T> = Generator<Progress, T, void>;

/** Without a pause. */
export function atOnce<T>(work: Gradual<T>): T {
  let step = work.next();
  while (!step.done) step = work.next();
  return step.value;
}

/** With a pause after each slice; a pause that rejects ends the work. */
export async function withPauses<T>(work: Gradual<T>, pause: (progress: Progress) => Promise<void>): Promise<T> {
  let step = work.next();
  while (!step.done) {
    await pause(step.value);
    step = work.next();
  }
  return step.value;
}
