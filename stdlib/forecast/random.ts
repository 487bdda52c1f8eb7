// Seeded random numbers: the same seed gives the same forecast bands on every machine.

import { normalQuantile } from "../distributions/normal.ts";

/** A generator of uniform numbers strictly between 0 and 1. One seed, one sequence; period about 2^128.
 *  Source: the "small fast counting" generator sfc32 of Doty-Humphrey's PractRand suite (public domain). */
export function seeded(seed: number): () => number {
  if (!Number.isFinite(seed)) throw new RangeError(`seed is ${seed}, expected a number`);
  const whole = Math.floor(seed);
  let a = 0x9e3779b9 ^ (whole | 0), b = 0x243f6a88 ^ Math.floor(whole / 4294967296), c = 0xb7e15162, count = 1;
  const next = (): number => {
    const t = (a + b + count) | 0;
    count = (count + 1) | 0;
    a = b ^ (b >>> 9);
    b = (c + (c << 3)) | 0;
    c = (c << 21) | (c >>> 11);
    c = (c + t) | 0;
    return ((t >>> 0) + 0.5) / 4294967296;
  };
  // Seeds that differ in a few bits need some rounds before their sequences part.
  for (let i = 0; i < 16; i++) next();
  return next;
}

/** A generator of standard normal numbers from one of uniform ones, by inversion: one for one, so that sequences stay aligned. */
export function normals(uniform: () => number): () => number {
  return () => normalQuantile(uniform());
}

/** Uniform numbers in rows of `count`: each row has one number in each of `count` equal strata, in an order of its own. Means of
 *  sums over the rows come out far surer than from independent numbers, and no distribution of a row is missed by chance.
 *  @returns flat by rows. Source: McKay, Beckman & Conover (1979), Latin hypercube sampling. */
export function stratified(rows: number, count: number, random: () => number): Float64Array {
  const out = new Float64Array(rows * count), order = new Uint32Array(count);
  for (let row = 0; row < rows; row++) {
    for (let i = 0; i < count; i++) {
      const j = Math.floor(random() * (i + 1)); // the shuffle of Fisher and Yates, inside out
      order[i] = order[j];
      order[j] = i;
    }
    for (let i = 0; i < count; i++) out[row * count + i] = (order[i] + random()) / count;
  }
  return out;
}
