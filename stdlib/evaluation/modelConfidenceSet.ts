// The models that cannot be told from the best one.

import { seeded } from "../forecast/random.ts";

export interface ConfidenceSet {
  /** Confidence that the set holds the best model. */
  readonly level: number;
  /** One a model, in the order given: its p-value, and whether it is in the set. NaN where the set is not available. */
  readonly models: readonly { readonly p: number; readonly inside: boolean }[];
  readonly status: "ok" | "unavailable";
  readonly note: string;
}

/** Model confidence set by the T-max statistic and a bootstrap of blocks of origins (run round the end).
 *  @param losses  one array a model, all of one length, one loss an origin, in time order
 *  @param block   length of the blocks; at least the horizon, since errors overlap so far
 *  Source: Hansen, Lunde & Nason (2011), section 3.1.2. Cost O(replications * origins * models). */
export function modelConfidenceSet(losses: readonly ArrayLike<number>[], { level = 0.9, block = 1, replications = 2000, seed = 1 } = {}): ConfidenceSet {
  const count = losses.length, kept = completeOrigins(losses), n = kept.length;
  const none = (note: string): ConfidenceSet => ({ level, status: "unavailable", note, models: losses.map(() => ({ p: NaN, inside: true })) });
  if (count < 2) return none("one model alone has nothing to be compared with");
  // Fewer than five stretches that do not overlap cannot tell how much mean losses vary.
  const needed = Math.max(10, 5 * block);
  if (n < needed) return none(`${n} origins are too few for a confidence set ${block > 1 ? `when errors overlap over ${block} of them` : "of models"}: at least ${needed} are needed`);
  const table = losses.map((loss) => Float64Array.from(kept, (t) => loss[t])), means = table.map(mean);
  const boot = bootMeans(table, block, replications, seeded(seed));
  const p = new Float64Array(count).fill(1);
  let alive = losses.map((_, i) => i), highest = 0;
  while (alive.length > 1) {
    const { worst, pValue, tied } = round(alive, means, boot);
    if (tied) break;
    highest = Math.max(highest, pValue);
    p[worst] = highest;
    alive = alive.filter((i) => i !== worst);
  }
  const models = [...p].map((value) => ({ p: value, inside: value > 1 - level }));
  return { level, status: "ok", models, note: `${models.filter((m) => m.inside).length} of ${count} models are in the ${Math.round(100 * level)}% confidence set, from ${n} origins.` };
}

/** One elimination: is the model farthest above the average of those alive farther than chance allows? */
function round(alive: readonly number[], means: readonly number[], boot: readonly Float64Array[]): { readonly worst: number; readonly pValue: number; readonly tied: boolean } {
  const size = alive.length, replications = boot[0].length, centre = alive.reduce((s, i) => s + means[i], 0) / size;
  const gaps = alive.map((i) => means[i] - centre), deviations = alive.map(() => new Float64Array(replications));
  for (let b = 0; b < replications; b++) {
    let centreB = 0;
    for (const i of alive) centreB += boot[i][b];
    centreB /= size;
    for (let k = 0; k < size; k++) deviations[k][b] = boot[alive[k]][b] - centreB - gaps[k];
  }
  const sd = deviations.map((d) => Math.sqrt(d.reduce((s, x) => s + x * x, 0) / replications));
  if (sd.every((s) => !(s > 0))) return { worst: alive[0], pValue: 1, tied: true };
  const t = gaps.map((gap, k) => (sd[k] > 0 ? gap / sd[k] : -Infinity)), statistic = Math.max(...t);
  let beyond = 0;
  for (let b = 0; b < replications; b++) {
    let most = -Infinity;
    for (let k = 0; k < size; k++) if (sd[k] > 0) most = Math.max(most, deviations[k][b] / sd[k]);
    if (most >= statistic) beyond++;
  }
  return { worst: alive[t.indexOf(statistic)], pValue: beyond / replications, tied: false };
}

/** Mean losses over resampled origins: the same draws for every model and every round. */
function bootMeans(table: readonly Float64Array[], block: number, replications: number, random: () => number): Float64Array[] {
  const n = table[0].length, boot = table.map(() => new Float64Array(replications)), picks = new Int32Array(n);
  for (let b = 0; b < replications; b++) {
    // Blocks run round the end, so that every origin is drawn as often as every other.
    for (let t = 0; t < n; t += block) {
      const start = Math.floor(random() * n);
      for (let k = 0; k < block && t + k < n; k++) picks[t + k] = (start + k) % n;
    }
    for (let i = 0; i < table.length; i++) {
      let sum = 0;
      for (let t = 0; t < n; t++) sum += table[i][picks[t]];
      boot[i][b] = sum / n;
    }
  }
  return boot;
}

function completeOrigins(losses: readonly ArrayLike<number>[]): number[] {
  const n = Math.min(...losses.map((loss) => loss.length)), kept: number[] = [];
  for (let t = 0; t < n; t++) if (losses.every((loss) => !Number.isNaN(loss[t]))) kept.push(t);
  return kept;
}

function mean(x: Float64Array): number { return x.reduce((a, b) => a + b, 0) / x.length; }
