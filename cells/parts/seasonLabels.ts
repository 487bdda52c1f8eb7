// What the positions of a season are called: months, quarters, days of the week, hours; else their numbers.

import { timesMs, type Series } from "../../stdlib/index.ts";

const months = ["Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec"];
const days = ["Mon", "Tue", "Wed", "Thu", "Fri", "Sat", "Sun"];

export interface SeasonLabel {
  readonly label: string;
  /** Place in the calendar's own order, from 0. */
  readonly order: number;
}

/** Labels of positions 0..length - 1, the first that of the series' first value. */
export function seasonLabels(series: Series, length: number): readonly SeasonLabel[] {
  const dayMs = 86_400_000, ms = timesMs(series), positions = Array.from({ length: Math.min(length, series.n) }, (_, p) => p);
  const from = (order: (p: number) => number, label: (order: number) => string): readonly SeasonLabel[] => positions.map(p => ({ order: order(p), label: label(order(p)) }));
  if (series.every === "P1M" && length === 12) return from(p => Number(series.times[p].slice(5, 7)) - 1, order => months[order]);
  if (series.every === "P3M" && length === 4) return from(p => Number(/Q(\d)/.exec(series.times[p])?.[1] ?? p + 1) - 1, order => `Q${order + 1}`);
  // Day 0 of the count, 1970-01-01, was a Thursday.
  if (series.every === "P1D" && length === 7) return from(p => (((Math.floor(ms[p] / dayMs) + 3) % 7) + 7) % 7, order => days[order]);
  if (series.every === "PT1H" && length === 24) return from(p => Math.floor((((ms[p] % dayMs) + dayMs) % dayMs) / 3_600_000), order => `${order} h`);
  return from(p => p, order => String(order + 1));
}
