// A made-up notebook and what an engine would say of it: invented monthly crossings of a ferry line.

import { fromMarkdown } from "mdast-util-from-markdown";
import { gfmFromMarkdown } from "mdast-util-gfm";
import { mathFromMarkdown } from "mdast-util-math";
import { gfm } from "micromark-extension-gfm";
import { math } from "micromark-extension-math";
import type { BlockReport, CellReport, FromEngine, NumberReport, ToEngine } from "../../../runtime/engine/messages.ts";
import type { Part } from "../../../cells/parts/part.ts";

export const fakeText = `# Vehicle crossings on the Skerry line

How many vehicles will cross in the next twelve months? Planning needs **one figure a month** and an honest band.
The series runs from 2009-01 to 2025-08 and is dominated by the *summer season*[^season].

[^season]: June to August carry 41% of the year; see [the ministry's definition](https://example.org/season) of summer.

## The data

\`\`\`load: crossings
file: "crossings.csv"
\`\`\`

\`\`\`window: sample
of: crossings
\`\`\`

## What the model may look like

A multiplicative seasonal model is natural here: with $w_t = (1-B)(1-B^{12}) \\log y_t$ we try

$$ (1 - \\phi B)\\, w_t = (1 + \\theta B)(1 + \\Theta B^{12})\\, \\varepsilon_t $$

| order | meaning | usual sign |
| :-- | :-- | --: |
| \`ma\` | shocks that last one month | −0.4 |
| \`season.ma\` | shocks that last one season | −0.6 |

\`\`\`slider: maOrder
from: 0
to: 6
\`\`\`

\`\`\`choice: scale
among: ["log", "none"]
\`\`\`

\`\`\`switch: robust
at: false
\`\`\`

\`\`\`fit: airline
series: steady
ma: maOrder
\`\`\`

\`\`\`correlogram: look
series: airline.residuals
\`\`\`

## What is forecast

The criterion is [-483.2](=airline.aicc) and the residuals pass at lag 24 (p = [0.31](<=ljungBox(airline, 24).p>)).
Next August will see about [11,204](=ahead.mean[11]) vehicles, and the best model is [airline](=contest.best.label), with [0.2](=gone).

\`\`\`forecast: ahead
model: airline
horizon: 12
\`\`\`

\`\`\`compare: contest
models: [airline]
\`\`\`

\`\`\`claims:
"the seasonal model beats last year's figure": true
\`\`\`

\`\`\`fit: broken
series: nothing
\`\`\`

\`\`\`forecast: later
model: broken
\`\`\`

### What could go wrong

1. A new bridge would end the series.
2. Fuel prices:
   - a *slow* effect,
   - <b>not</b> in the model.

> Past shape is no promise.

- [x] checked the months with missing counts
- [ ] ask the harbour office ![map of the line](https://example.org/map.png)

\`\`\`
plain code block
\`\`\`
`;

const n = 200;
const ms = (i: number): number => Date.UTC(2009, i, 1);
const iso = (i: number): string => new Date(ms(i)).toISOString().slice(0, 7);
const level = (i: number): number => (5200 + 14 * i) * (1 + 0.38 * Math.sin((i - 3) / 12 * 2 * Math.PI) + 0.02 * Math.sin(i * 12.9898) * 3);
const axis = { field: "time", type: "temporal", axis: { title: null } };

export interface FakeNotebook { answer(message: ToEngine): readonly FromEngine[]; looping(): readonly FromEngine[] }

export function fakeNotebook(points = n): FakeNotebook {
  const values = Float64Array.from({ length: points }, (_, i) => level(i * n / points));
  let version = 0; let text = fakeText;
  const settings = new Map<string, unknown>();
  const order = (): number => settings.get("maOrder") as number ?? 1;

  let known: { text: string; tree: ReturnType<typeof fromMarkdown> } | null = null;
  const parsed = (): ReturnType<typeof fromMarkdown> => {
    if (known?.text !== text) known = { text, tree: fromMarkdown(text, { extensions: [gfm(), math()], mdastExtensions: [gfmFromMarkdown(), mathFromMarkdown()] }) };
    return known.tree;
  };
  const cellsOf = (): CellReport[] => {
    const found: CellReport[] = [];
    for (const node of parsed().children) {
      if (node.type !== "code" || !node.lang?.endsWith(":")) continue;
      const kind = node.lang.slice(0, -1); const name = node.meta ?? null;
      const failed = name === "broken"; const blocked = name === "later";
      const line = node.position?.start.line ?? 1; const from = node.position?.start.offset ?? 0; const to = node.position?.end.offset ?? 0;
      found.push({
        id: name ?? `${kind}-1`, name, kind, line, from, to, state: failed ? "failed" : blocked ? "blocked" : "current",
        message: failed ? "There is no cell or function named nothing. Did you mean noting?" : blocked ? "It needs broken, which failed." : null,
        at: failed ? { line: line + 1, column: 9, from: from + 20, to: from + 27 } : null,
        notes: name === "crossings" ? ["2 months were absent from the file and count as missing: 2011-02, 2016-11."] : [],
        show: failed || blocked ? null : show(kind, name), progress: null, fields: name === "airline" ? [{ expression: "airline.aicc", value: -483.2 + order() }, { expression: "airline.theta[0]", value: -0.4018 }, { expression: "ljungBox(airline, 24).p", value: 0.3127 }, { expression: "airline.label", value: "ARMA(0,1)(0,1)_12" }] : [], runs: 1, stopped: false,
      });
    }
    return found;
  };

  const show = (kind: string, name: string | null): readonly Part[] => {
    const q = order();
    if (kind === "load") return [
      { part: "figures", figures: [{ label: "months", value: points }, { label: "from", value: iso(0) }, { label: "to", value: iso(n - 1) }, { label: "missing", value: 2 }] },
      { part: "chart", title: "Vehicle crossings a month", alt: "Crossings rise from about 5,000 to 8,000 a month and peak every July.", height: 210,
        spec: { data: { name: "observed" }, mark: { type: "line", style: "sample" }, encoding: { x: axis, y: { field: "crossings", type: "quantitative", title: "vehicles" } } },
        data: { observed: { time: Float64Array.from({ length: points }, (_, i) => ms(i)), crossings: values } } },
    ];
    if (kind === "slider") return [{ part: "control", control: "slider", label: "moving-average order", from: 0, to: 6, step: 1, at: q, kept: 1 }];
    if (kind === "choice") return [{ part: "control", control: "choice", label: "scale", among: ["log", "none"], at: settings.get("scale") as string ?? "log", kept: "log" }];
    if (kind === "switch") return [{ part: "control", control: "switch", label: "robust errors", at: settings.get("robust") as boolean ?? false, kept: false }];
    if (kind === "window") { const at = settings.get("sample") as { from: string; to: string } ?? { from: iso(12), to: iso(n - 1) }; return [{ part: "control", control: "window", label: "sample window", times: Array.from({ length: n }, (_, i) => iso(i)), values: Float64Array.from({ length: n }, (_, i) => level(i)), every: "P1M", unit: "vehicles", at, kept: { from: iso(12), to: iso(n - 1) } }]; }
    if (kind === "fit") return [
      { part: "equation", title: "Fitted model", tex: `(1-B)(1-B^{12})\\log y_t = (1 ${q > 0 ? "- 0.402\\,B" : ""})(1 - 0.557\\,B^{12})\\,\\varepsilon_t,\\qquad \\hat\\sigma^2 = 0.00134`, text: "(1-B)(1-B^12) log y(t) = (1 - 0.402 B)(1 - 0.557 B^12) e(t), sigma squared 0.00134" },
      { part: "table", title: "Estimates", columns: [{ title: "coefficient" }, { title: "estimate", format: ".4f" }, { title: "standard error", format: ".4f" }, { title: "95% interval" }], rows: [...Array.from({ length: q }, (_, i) => [`θ${i + 1}`, -0.4018 / (i + 1), 0.0896, "−0.577 to −0.226"] as const), ["Θ1", -0.5569, 0.0731, "−0.700 to −0.414"], ["σ²", 0.001348, NaN, "not estimated"]] },
      { part: "figures", figures: [{ label: "log-likelihood", value: 244.6965, format: ".2f" }, { label: "AICc", value: -483.2 + q, format: ".2f" }, { label: "observations used", value: 187 }] },
      { part: "text", tone: "caution", text: "Two coefficients are strongly correlated (0.93): the data can hardly tell them apart. Try one order less." },
    ];
    if (kind === "correlogram") return [{ part: "chart", title: "Correlogram of the residuals", alt: `One of 24 autocorrelations lies outside the band, at lag ${q + 8}.`, height: 250,
      spec: { vconcat: ["acf", "pacf"].map((which) => ({ data: { name: which }, layer: [
        { mark: { type: "rule", style: "guide" }, encoding: { y: { datum: 0 } } },
        { mark: { type: "rule", style: "limit" }, encoding: { y: { field: "high", type: "quantitative" } } }, { mark: { type: "rule", style: "limit" }, encoding: { y: { field: "low", type: "quantitative" } } },
        { transform: [{ filter: "abs(datum.value) <= datum.high" }], mark: { type: "bar", style: "mark", width: 3 }, encoding: { x: { field: "lag", type: "quantitative", title: which === "pacf" ? "lag (months)" : null }, y: { field: "value", type: "quantitative", title: which.toUpperCase() } } },
        { transform: [{ filter: "abs(datum.value) > datum.high" }], mark: { type: "point", style: "outside" }, encoding: { x: { field: "lag", type: "quantitative" }, y: { field: "value", type: "quantitative" } } },
      ] })) },
      data: Object.fromEntries(["acf", "pacf"].map((which, w) => [which, { lag: Float64Array.from({ length: 24 }, (_, i) => i + 1), value: Float64Array.from({ length: 24 }, (_, i) => i === q + 7 ? 0.21 : 0.1 * Math.sin((i + 1) * (q + 2 + w))), high: Float64Array.from({ length: 24 }, () => 0.143), low: Float64Array.from({ length: 24 }, () => -0.143) }])) }];
    if (kind === "forecast") return [{ part: "chart", title: "Forecast of vehicle crossings", alt: "The forecast repeats the season at a slightly higher level; the 90% band widens from 6% to 13%.", height: 260,
      spec: { layer: [
        { data: { name: "ahead" }, mark: { type: "area", style: "band" }, encoding: { x: axis, y: { field: "low", type: "quantitative", title: "vehicles" }, y2: { field: "high" } } },
        { data: { name: "observed" }, mark: { type: "line", style: "sample" }, encoding: { x: axis, y: { field: "crossings", type: "quantitative" } } },
        { data: { name: "heldOut" }, mark: { type: "line", style: "heldOut" }, encoding: { x: axis, y: { field: "held out", type: "quantitative" } } },
        { data: { name: "ahead" }, mark: { type: "line", style: "model", point: true }, encoding: { x: axis, y: { field: "mean", type: "quantitative" } } },
      ] },
      data: {
        observed: { time: Float64Array.from({ length: 48 }, (_, i) => ms(n - 60 + i)), crossings: Float64Array.from({ length: 48 }, (_, i) => level(n - 60 + i)) },
        heldOut: { time: Float64Array.from({ length: 12 }, (_, i) => ms(n - 12 + i)), "held out": Float64Array.from({ length: 12 }, (_, i) => level(n - 12 + i) * 1.02) },
        ahead: { time: Float64Array.from({ length: 24 }, (_, i) => ms(n - 12 + i)), mean: Float64Array.from({ length: 24 }, (_, i) => level(n - 12 + i) * (1 + q / 60)), low: Float64Array.from({ length: 24 }, (_, i) => level(n - 12 + i) * (0.95 - i / 200)), high: Float64Array.from({ length: 24 }, (_, i) => level(n - 12 + i) * (1.05 + q / 30 + i / 200)) },
      } }];
    if (kind === "compare") return [{ part: "table", title: "Errors at 24 held-out origins, 12 months ahead", columns: [{ title: "model" }, { title: "MAE", format: ",.0f", unit: "vehicles" }, { title: "MASE", format: ".3f" }, { title: "coverage of 90%", format: ".0%" }], rows: [["airline", 214.2, 0.612, 0.88], ["seasonal naive", 371.9, 1.063, 0.91], ["drift", 1603.4, 4.58, 0.97]], marked: [{ row: 0, word: "best" }], note: "Errors are in vehicles, after the logarithm is undone." }];
    if (kind === "claims") return [{ part: "claims", claims: [{ claim: "the seasonal model beats last year's figure", holds: true }, { claim: "no residual autocorrelation is left at lag 24", holds: q > 0, message: q > 0 ? undefined : "p is 0.004" }, { claim: "the fuel price adds nothing", holds: null, message: "broken failed" }] }];
    return name === null ? [] : [{ part: "text", text: `${kind} ${name}` }];
  };

  const numbersOf = (blocks: readonly BlockReport[]): NumberReport[] => blocks.flatMap((block) => block.block === "prose" && block.node ? links(block.node) : []).map(({ url, saved, from, to }, index) => {
    const expression = url.slice(1); const moved = expression === "airline.aicc" && order() !== 1;
    return { index, line: 1, from, to, expression, saved, now: expression === "gone" ? null : moved ? (-483.2 + 1.7 * order()).toFixed(1) : expression === "ahead.mean[11]" ? "11,391" : saved, value: expression === "gone" ? null : 1, state: expression === "gone" ? "undecided" : moved || expression === "ahead.mean[11]" ? "moved" : "agrees", message: expression === "gone" ? "There is no cell named gone." : null };
  });

  const speak = (): FromEngine[] => {
    const tree = parsed();
    let count = 0; const cells = cellsOf(); let c = 0; const seen: string[] = [];
    const blocks: BlockReport[] = tree.children.map((node) => {
      const from = node.position?.start.offset ?? 0; const to = node.position?.end.offset ?? 0;
      if (node.type === "code" && node.lang?.endsWith(":")) return { block: "cell", key: `cell:${cells[c].id}`, from, to, cell: cells[c++].id };
      const own = links(node).map(() => count++);
      return { block: "prose", key: `p${seen.push(text.slice(from, to)) && seen.filter((one) => one === text.slice(from, to)).length}${JSON.stringify(text.slice(from, to))}`, from, to, node, numbers: own };
    });
    return [{ from: "outline", version, title: "Vehicle crossings on the Skerry line", blocks, problems: [], definitions: tree.children.filter((node) => node.type === "footnoteDefinition" || node.type === "definition") },
      ...cells.map((cell) => ({ from: "cell" as const, cell })), ...numbersOf(blocks).map((number) => ({ from: "number" as const, number })), settled()];
  };
  const settled = (): FromEngine => ({ from: "settled", version, moved: Object.fromEntries([...settings].filter(([, value]) => value !== 1 && value !== "log" && value !== false)) });

  return {
    answer(message) {
      if (message.to === "text") { version = message.version; text = message.text; return speak(); }
      if (message.to === "set") settings.set(message.name, message.value);
      else if (message.to === "unset") { if (!settings.delete(message.name)) return []; } else return [];
      return speak().filter((said) => said.from !== "outline" && !(said.from === "cell" && (["load", "compare"].includes(said.cell.kind) || said.cell.state !== "current" || (["choice", "switch", "window", "slider"].includes(said.cell.kind) && said.cell.name !== message.name))));
    },
    looping: () => cellsOf().filter((cell) => cell.name === "airline").map((cell) => ({ from: "cell", cell: { ...cell, state: "working", show: null } })),
  };
}

function links(node: unknown): { url: string; saved: string; from: number; to: number }[] {
  const { type, url, children, position } = node as { type: string; url?: string; children?: readonly { value?: string }[]; position?: { start: { offset?: number }; end: { offset?: number } } };
  const own = type === "link" && url?.startsWith("=") ? [{ url, saved: children?.[0]?.value ?? "", from: position?.start.offset ?? 0, to: position?.end.offset ?? 0 }] : [];
  return [...own, ...(children ?? []).flatMap(links)];
}
