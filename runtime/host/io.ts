// What a command may touch besides files: so that every command runs in a test without a process.

export interface Io {
  /** Writes to standard output; the text brings its own line ends. */
  out(text: string): void;
  /** Writes to standard error. */
  error(text: string): void;
  /** Folder that relative paths start from. */
  readonly cwd: string;
  now(): Date;
  /** Aborted when the user asks a command that keeps running to end (Ctrl-C). */
  readonly stop: AbortSignal;
}

/** Exit codes of every command. */
export const exit = { stands: 0, fails: 1, cannotRun: 2 } as const;

/** The command could not be run: told to the user in `message` alone, exit code 2. */
export class CannotRun extends Error {
  constructor(message: string) { super(message); this.name = "CannotRun"; }
}
