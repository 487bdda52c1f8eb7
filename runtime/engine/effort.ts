// How much one evaluation may do. An expression is a stranger's as well: it ends, or says why it does not.

import { EvaluationError, isList } from "./values.ts";

/** Arrow functions may call one another this deep: well inside the stack, and deeper than any sensible expression. */
const DEEPEST = 200;
/** Calls, and items and letters gone through or made: a second of work, and less than a gigabyte of small objects. */
const MOST_STEPS = 10_000_000;
/** More arguments than this come from a list that was meant to be handed over whole; far more would overrun the stack. */
const MOST_ARGUMENTS = 10_000;

type Place = EvaluationError["place"];

export class Effort {
  #depth = 0;
  #steps = 0;

  /** @throws EvaluationError once all that was spent is too much */
  spend(steps: number, place: Place = null): void {
    this.#steps += steps;
    if (!(this.#steps <= MOST_STEPS)) throw new EvaluationError(`This goes through more than ${MOST_STEPS / 1e6} million items and is not computed: narrow it, or spread it over several cells`, place);
  }

  /** An arrow function's call begins; `leave` ends it. @throws EvaluationError */
  enter(place: Place): void {
    if (this.#depth >= DEEPEST) throw new EvaluationError("This expression calls itself without end", place);
    this.spend(1, place);
    this.#depth += 1;
  }

  leave(): void { this.#depth -= 1; }

  /** A list that a function gave, or that is about to be gone through. */
  list<T>(value: T): T {
    if (isList(value)) this.spend(value.length);
    return value;
  }

  arguments(given: readonly unknown[]): readonly unknown[] {
    if (given.length > MOST_ARGUMENTS) throw new EvaluationError(`A function takes up to ${MOST_ARGUMENTS} arguments: hand over the list itself, without \`...\``);
    return given;
  }
}
