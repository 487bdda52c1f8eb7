// Long work of the numbers, done as a cell of a notebook does it.

import { withPauses, type Gradual } from "../../stdlib/index.ts";
import type { RunContext } from "../kind.ts";
import { asOptionError } from "./needs.ts";

/** Does the work slice by slice: between two of them it says how far it is and lets newer messages in.
 *  @throws OptionError where the numbers refuse; what `breathe` throws where the work has been overtaken */
export async function inSlices<T>(work: Gradual<T>, context: Pick<RunContext, "progress" | "breathe">): Promise<T> {
  try {
    return await withPauses(work, ({ done, total, what }) => {
      context.progress(done, total, what);
      return context.breathe();
    });
  } catch (error) {
    throw asOptionError(error);
  }
}
