// Makes the invented data of the examples, the same to the byte each time: `node examples/make.mjs`.
// The places, the ferry, the co-operative and the reservoir do not exist.

import { mkdirSync, writeFileSync } from "node:fs";

const folder = new URL("data/", import.meta.url);
mkdirSync(folder, { recursive: true });

/** Uniform numbers in (0, 1) from a seed: the 32-bit generator "mulberry32" (public domain, T. Ettinger). */
function uniform(seed) {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = Math.imul(state ^ (state >>> 15), state | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return (((t ^ (t >>> 14)) >>> 0) + 0.5) / 4294967296;
  };
}

/** Standard normal numbers, by Box and Muller (1958). */
function normal(seed) {
  const next = uniform(seed);
  return () => Math.sqrt(-2 * Math.log(next())) * Math.cos(2 * Math.PI * next());
}

const pad = (k) => String(k).padStart(2, "0");
const write = (name, header, rows) => writeFileSync(new URL(name, folder), [header, ...rows].join("\n") + "\n");

/** Vehicles carried a month by a ferry line: steady growth, a summer peak, shocks that fade within a month or a year. */
function ferry() {
  const shock = normal(151);
  const months = 15 * 12;
  const warmUp = 60;
  const e = Array.from({ length: warmUp + months }, () => 0.034 * shock());
  const season = [-0.42, -0.38, -0.17, 0.02, 0.14, 0.27, 0.49, 0.46, 0.16, -0.02, -0.24, -0.31];
  // (1 - B)(1 - B^12) z = (1 - 0.55 B)(1 - 0.75 B^12) e, started from a plain trend and season.
  const z = season.map((s, i) => s + 0.0024 * i);
  for (let t = 12; t < e.length; t++) {
    const before = t === 12 ? season[11] - 0.0024 : z[t - 13];
    z[t] = z[t - 1] + z[t - 12] - before + e[t] - 0.55 * e[t - 1] - 0.75 * e[t - 12] + 0.4125 * (t >= 13 ? e[t - 13] : 0);
  }
  const last = z.slice(warmUp);
  const level = 9.55 - last.reduce((a, b) => a + b, 0) / months;
  const rows = last.map((v, i) => `${2010 + Math.floor(i / 12)}-${pad((i % 12) + 1)},${Math.round(Math.exp(v + level))}`);
  write("ferry.csv", "month,vehicles", rows);
}

/** A weekly wholesale price index: a random walk in logs whose changes carry on a little from week to week. */
function prices() {
  const shock = normal(5_202);
  let change = 0;
  let before = 0;
  let level = Math.log(100);
  const rows = [];
  const day = new Date(Date.UTC(2018, 11, 31));
  for (let week = 0; week < 312; week++) {
    const e = 0.011 * shock();
    change = 0.0009 * (1 - 0.35) + 0.35 * change + e + 0.25 * before;
    before = e;
    level += change;
    rows.push(`${isoWeek(day)},${Math.exp(level).toFixed(2)}`);
    day.setUTCDate(day.getUTCDate() + 7);
  }
  write("prices.csv", "week,index", rows);
}

/** ISO 8601 week of a Monday. */
function isoWeek(monday) {
  const thursday = new Date(monday.getTime() + 3 * 86_400_000);
  const first = Date.UTC(thursday.getUTCFullYear(), 0, 1);
  return `${thursday.getUTCFullYear()}-W${pad(1 + Math.floor((thursday.getTime() - first) / 604_800_000))}`;
}

/** Daily inflow of a reservoir: rain makes it jump, it recedes over days, the year has a wet and a dry half; the gauge failed now and then. */
function inflow() {
  const shock = normal(8_819);
  const rows = [];
  const start = Date.UTC(2022, 0, 1);
  let x1 = 0;
  let x2 = 0;
  const silent = [[97, 99], [260, 260], [411, 417], [655, 656], [900, 900]];
  for (let t = 0; t < 3 * 365 + 1; t++) {
    const x = 1.12 * x1 - 0.24 * x2 + 0.16 * shock();
    x2 = x1;
    x1 = x;
    const angle = (2 * Math.PI * (t + 0.5)) / 365.25;
    const value = Math.exp(2.45 + 0.55 * Math.cos(angle - 0.5) + 0.12 * Math.cos(2 * angle + 0.9) + x);
    const missing = silent.some(([from, to]) => t >= from && t <= to);
    rows.push(`${new Date(start + t * 86_400_000).toISOString().slice(0, 10)},${missing ? "" : value.toFixed(2)}`);
  }
  write("inflow.csv", "day,inflow", rows);
}

/** Monthly heat sent into a town's pipes: cold drives it, a new quarter was joined to the net, and a mild month's surplus carries on. */
function heat() {
  const shock = normal(613);
  const weather = normal(4_417);
  const usual = [412, 360, 318, 204, 96, 28, 12, 16, 74, 182, 288, 380];
  const rows = [];
  const coldness = [];
  let carried = 0;
  for (let t = 0; t < 11 * 12; t++) {
    const month = `${2014 + Math.floor(t / 12)}-${pad((t % 12) + 1)}`;
    const days = Math.max(4, usual[t % 12] * (1 + 0.1 * weather()) + 8 * weather());
    carried = 0.62 * carried + 24 * shock();
    const joined = t >= 93 ? 118 : 0;
    rows.push(`${month},${(305 + joined + 2.15 * days + carried).toFixed(1)}`);
    coldness.push(`${month},${days.toFixed(1)}`);
  }
  // The next twelve months: what the weather service calls usual, and a cold winter a fifth colder.
  const ahead = usual.map((days, i) => ({ month: `2025-${pad(i + 1)}`, days }));
  write("heat.csv", "month,heat", rows);
  write("coldness.csv", "month,degree days", coldness);
  write("coldness-ahead.csv", "month,usual,cold", ahead.map(({ month, days }) => `${month},${days.toFixed(1)},${(1.2 * days).toFixed(1)}`));
}

ferry();
prices();
heat();
inflow();
