// The command line as a function: arguments and surroundings in, exit code out. Each command is loaded when it is asked for,
// so that `verify` does not wait for what draws charts or watches files.

import { readArguments } from "./arguments.ts";
import type { Command } from "./arguments.ts";
import { CannotRun, exit } from "./io.ts";
import type { Io } from "./io.ts";
import { usage } from "./usage.ts";
import { version } from "./version.ts";

/** @param argv  the arguments after the program's name
 *  @returns the exit code: 0 all stands, 1 something does not, 2 it could not be run */
export async function run(argv: readonly string[], io: Io): Promise<number> {
  try {
    return await perform(readArguments(argv), io);
  } catch (error) {
    if (!(error instanceof CannotRun)) throw error;
    io.error(`lagbook: ${error.message}\n`);
    return exit.cannotRun;
  }
}

async function perform(command: Command, io: Io): Promise<number> {
  switch (command.command) {
    case "help": io.out(usage); return exit.stands;
    case "version": io.out(`${version}\n`); return exit.stands;
    case "begin": return (await import("./begin.ts")).begin(command, io);
    case "open": return (await import("./open.ts")).open(command, io);
    case "verify": return (await import("./verify.ts")).verify(command, io);
    case "page": return (await import("./exportPage.ts")).exportPage(command, io);
  }
}
