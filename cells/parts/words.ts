// How numbers, p-values, lists and spans are put into sentences, alike in every kind.

/** A number in as few digits as say it: `digits` significant ones, grouped, plain minus sign. A dash where there is none. */
export function figure(value: number, digits = 3): string {
  if (!Number.isFinite(value)) return Number.isNaN(value) ? "–" : value > 0 ? "∞" : "−∞";
  if (value === 0) return "0";
  const size = Math.abs(value);
  if (size < 1e-4 || size >= 1e12) return value.toExponential(digits - 1).replace("-", "−").replace("e+", "e");
  const decimals = Math.max(0, digits - 1 - Math.floor(Math.log10(size)));
  const [whole, part] = size.toFixed(Math.min(decimals, 10)).split(".");
  const text = whole.replace(/\B(?=(\d{3})+$)/g, ",") + (part === undefined ? "" : `.${part}`);
  return /[1-9]/.test(text) && value < 0 ? `−${text}` : text;
}

/** A number with a fixed count of decimals, plain minus sign. */
export function decimals(value: number, count: number): string {
  if (!Number.isFinite(value)) return figure(value);
  const text = Math.abs(value).toFixed(count);
  return value < 0 && /[1-9]/.test(text) ? `−${text}` : text;
}

/** "p = 0.031", "p < 0.01" where the table ends. */
export function pText(p: number, bound: "below" | "above" | null = null): string {
  if (Number.isNaN(p)) return "no p-value";
  if (bound === "below") return `p < ${Number(p.toPrecision(3))}`;
  if (bound === "above") return `p > ${p.toFixed(2)}`;
  if (p < 0.001) return "p < 0.001";
  return `p = ${p < 0.1 ? figure(p, 2) : decimals(p, 2)}`;
}

/** "95%" of 0.95; "99.5%" of 0.995. */
export function percent(share: number, digits = 1): string {
  const value = share * 100;
  const text = value.toFixed(digits).replace(/\.0+$/, "");
  return `${text.replace("-", "−")}%`;
}

/** A probability as a percentage; one that is nearly certain is not called certain. */
export function chance(p: number): string {
  if (p > 0.999) return "over 99.9%";
  return p < 0.001 ? "under 0.1%" : percent(p);
}

/** "a", "a and b", "a, b and c". */
export function listOf(items: readonly (string | number)[], word = "and"): string {
  if (items.length < 2) return items.join("");
  return `${items.slice(0, -1).join(", ")} ${word} ${items[items.length - 1]}`;
}

/** The first few of a list, and how many more there are. */
export function someOf(items: readonly (string | number)[], most = 6): string {
  if (items.length <= most) return listOf(items);
  return `${items.slice(0, most).join(", ")} and ${items.length - most} more`;
}

/** "1, 2 and 12", and "1 to 9 and 12" where lags follow on each other. */
export function lagsInWords(lags: readonly number[], most = 8): string {
  const runs: [number, number][] = [];
  for (const lag of lags) {
    const last = runs[runs.length - 1];
    if (last !== undefined && lag === last[1] + 1) last[1] = lag;
    else runs.push([lag, lag]);
  }
  return someOf(runs.flatMap(([from, to]) => (to - from < 2 ? Array.from({ length: to - from + 1 }, (_, i) => String(from + i)) : [`${from} to ${to}`])), most);
}

/** "1 lag", "3 lags". */
export function count(n: number, one: string, many = `${one}s`): string {
  return `${String(n).replace(/\B(?=(\d{3})+$)/g, ",")} ${n === 1 ? one : many}`;
}

/** First letter as a capital. */
export function capital(text: string): string {
  return text.slice(0, 1).toUpperCase() + text.slice(1);
}
