// Live numbers: does the saved text still say what the value is, and how would it read now?

import { format as d3Format, formatSpecifier } from "d3-format";

export type LiveValue = number | string | boolean;

/** The form of a number as an author wrote it. */
interface Form {
  readonly before: string; readonly after: string;
  /** "<" of `<0.001`, ">" of `>0.99`, or nothing. */
  readonly bound: "<" | ">" | "";
  readonly boundGap: string;
  readonly sign: string;
  readonly currency: string;
  readonly grouping: string;
  readonly decimals: number;
  readonly exponent: { readonly letter: string; readonly value: number } | null;
  readonly percent: string;
  /** The number that the text states, in the value's own unit (12% is 0.12). */
  readonly states: number;
  /** Half a unit of the last digit shown, in the value's own unit. */
  readonly half: number;
}

/** Agrees if within half a unit of the last digit shown, with a hair's tolerance; `<0.001` agrees below; either minus sign.
 *  Texts agree when they are the same, truths when the text is `true`/`yes` or `false`/`no`. null: undecided, the value is missing or infinite.
 *  @param pattern d3-format pattern of the link's title; null where the text's own form is the pattern */
export function agrees(saved: string, pattern: string | null, value: LiveValue): boolean | null {
  if (typeof value === "string") return plain(saved) === plain(value);
  if (typeof value === "boolean") return (value ? ["true", "yes"] : ["false", "no"]).includes(saved.trim().toLowerCase());
  if (!Number.isFinite(value)) return null;
  if (pattern !== null) {
    const printed = patterned(pattern, value);
    if (printed !== null && plain(printed) === plain(saved)) return true;
    if (printed === null || /[sSbodxXc]\s*$/.test(pattern.trim())) return false;
  }
  const form = formOf(saved);
  if (form === null) return false;
  if (form.bound === "<") return value < form.states || near(value, form.states);
  if (form.bound === ">") return value > form.states || near(value, form.states);
  return Math.abs(value - form.states) <= form.half * (1 + 1e-9) + Math.abs(value) * 4 * Number.EPSILON;
}

/** The value in the saved text's own form, or by the pattern. */
export function formatLike(saved: string, pattern: string | null, value: LiveValue): string {
  if (typeof value === "string") return value;
  if (typeof value === "boolean") return /^\s*(yes|no)\s*$/i.test(saved) ? (value ? "yes" : "no") : String(value);
  if (!Number.isFinite(value)) return Number.isNaN(value) ? "missing" : value > 0 ? "∞" : "-∞";
  if (pattern !== null) {
    const printed = patterned(pattern, value);
    if (printed !== null) return /-\d/.test(saved) ? printed.replaceAll("\u2212", "-") : printed;
  }
  const form = formOf(saved);
  return form === null ? general(value) : inForm(form, value);
}

/** null for a pattern that d3-format takes; a number padded to thousands of letters is refused as well. */
export function patternFault(pattern: string): string | null {
  return patterned(pattern, 1) === null ? `\`${pattern}\` is not a number pattern: write one such as \`.2f\`, \`,.0f\` or \`.1%\`` : null;
}

/** Letters that a number is padded to at most, and decimals that it is printed with: ECMAScript's own limit. */
const MOST_LETTERS = 100;

function patterned(pattern: string, value: number): string | null {
  try {
    const specifier = formatSpecifier(pattern);
    return (specifier.width ?? 0) > MOST_LETTERS ? null : d3Format(pattern)(value);
  } catch {
    // d3-format throws for a pattern it cannot read: the caller falls back to the text's own form, and `patternFault` tells the author.
    return null;
  }
}

const NUMBER = /^([^\d<>+\-\u2212.]*?)(?:([<>])(\s*))?([+\-\u2212]?)(\p{Sc}?)(\d{1,3}(?:([,\u2009\u202f\u00a0'\u2019])\d{3})(?:\7\d{3})*|\d+)?(\.\d+)?(?:([eE])([+\-\u2212]?\d+))?([\s\u00a0]*%)?(\D*)$/u;

function formOf(saved: string): Form | null {
  const match = NUMBER.exec(saved.trim());
  if (match === null || (match[6] === undefined && match[8] === undefined)) return null;
  const [, before, bound = "", boundGap = "", sign, currency, whole = "0", grouping = "", fraction = "", letter, power, percent = "", after] = match;
  const exponent = letter === undefined ? null : { letter, value: Number(power.replace("\u2212", "-")) };
  const decimals = Math.min(MOST_LETTERS, Math.max(0, fraction.length - 1));
  // Scaled by text, not by multiplication, so that 12% is 0.12 and not its neighbour.
  const scale = (exponent?.value ?? 0) - (percent === "" ? 0 : 2);
  const digits = `${grouping === "" ? whole : whole.replaceAll(grouping, "")}${fraction}`;
  return {
    before, after, bound: bound as Form["bound"], boundGap, sign, currency, grouping, decimals, exponent, percent,
    states: (sign === "-" || sign === "\u2212" ? -1 : 1) * Number(`${digits}e${scale}`), half: 0.5 * Number(`1e${scale - decimals}`),
  };
}

function inForm(form: Form, value: number): string {
  if (form.bound !== "" && (form.bound === "<" ? value < form.states : value > form.states)) return `${form.before}${form.bound}${form.boundGap}${digitsIn(form, form.states)}${form.percent}${form.after}`;
  return `${form.before}${digitsIn(form, value)}${form.percent}${form.after}`;
}

function digitsIn(form: Form, value: number): string {
  const shown = form.percent === "" ? value : value * 100;
  let digits = form.exponent === null ? Math.abs(shown).toFixed(form.decimals) : Math.abs(shown).toExponential(form.decimals).replace("e", form.exponent.letter).replace("+", "");
  if (form.grouping !== "") digits = digits.replace(/\d+/, (whole) => whole.replace(/\B(?=(\d{3})+$)/g, form.grouping));
  // Minus zero is printed as zero.
  const negative = shown < 0 && /[1-9]/.test(digits.split(/[eE]/)[0]);
  const minus = form.sign === "\u2212" ? "\u2212" : "-";
  return `${negative ? minus : form.sign === "+" ? "+" : ""}${form.currency}${digits}`;
}

/** Where the saved text has no form of a number: four significant digits. */
function general(value: number): string {
  if (Number.isInteger(value) && Math.abs(value) < 1e15) return String(value);
  return String(Number(value.toPrecision(4)));
}

function near(a: number, b: number): boolean {
  return Math.abs(a - b) <= 4 * Number.EPSILON * Math.max(Math.abs(a), Math.abs(b));
}

function plain(text: string): string {
  return text.replaceAll("\u2212", "-").replace(/[\s\u00a0\u2009\u202f]+/g, " ").trim();
}
