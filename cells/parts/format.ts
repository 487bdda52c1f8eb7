// Numbers of the data to text, as an analyst would type them.

/** A number with up to `digits` significant ones, no trailing zeros, whole thousands grouped: 12 as "12", 4789.25 as "4,789".
 *  @example plain(0.123456) // "0.1235" */
export function plain(value: number, digits = 4): string {
  if (Number.isNaN(value)) return "–";
  if (!Number.isFinite(value)) return value > 0 ? "∞" : "−∞";
  const size = Math.abs(value);
  const sign = value < 0 ? "−" : "";
  if (size !== 0 && (size < 1e-4 || size >= 1e15)) return sign + size.toExponential(digits - 1).replace(/\.?0+e/, "e").replace("e+", "e").replace("e-", "e−");
  const decimals = size === 0 ? 0 : Math.max(0, digits - 1 - Math.floor(Math.log10(size)));
  const [whole, part] = size.toFixed(Math.min(decimals, 12)).split(".");
  const rest = (part ?? "").replace(/0+$/, "");
  return sign + whole.replace(/\B(?=(\d{3})+$)/g, ",") + (rest === "" ? "" : `.${rest}`);
}

/** d3-format pattern for a column of figures of mixed size: up to six digits, grouped; powers of ten only where some are tiny or huge. */
export function mixedFormat(figures: readonly unknown[]): string {
  const odd = figures.some((v) => typeof v === "number" && Number.isFinite(v) && v !== 0 && (Math.abs(v) < 1e-5 || Math.abs(v) >= 1e12));
  return odd ? ",.6~g" : ",.6~r";
}

/** A d3-format pattern that keeps about four significant digits of the numbers at hand. */
export function pattern(values: ArrayLike<number>): string {
  let size = 0;
  for (let i = 0; i < values.length; i++) if (Number.isFinite(values[i])) size = Math.max(size, Math.abs(values[i]));
  if (size === 0) return ",.3f";
  const digits = Math.max(0, 3 - Math.floor(Math.log10(size)));
  return size < 1e-4 || size >= 1e13 ? ".4~g" : `,.${Math.min(digits, 8)}f`;
}
