// How charts look: one encoding each for sample, held-out data, model and band, through the whole product.
// Colours are the page's own CSS variables, so light, dark and print need no second drawing.

/** Label font of charts; named in full because the chart library measures texts with it. */
export const chartFont = '"Source Sans 3", "Noto Sans", "Segoe UI", Roboto, "Helvetica Neue", Arial, sans-serif';

const ink = "var(--ink)"; const soft = "var(--ink-soft)"; const rule = "var(--rule)"; const accent = "var(--accent)";
const sample = "var(--sample)"; const held = "var(--held)"; const alarm = "var(--alarm)";

const categories = ["var(--cat-1)", "var(--cat-2)", "var(--cat-3)", "var(--cat-4)", "var(--cat-5)", "var(--cat-6)"];
const shapes = ["circle", "square", "triangle-up", "diamond", "cross", "triangle-down"];
const dashes = [[1, 0], [6, 3], [2, 2], [8, 2, 2, 2], [4, 4], [1, 3]];

/** Labels of a time axis: years where a year begins, months within it, days within those. */
export const timeLabels = [
  "utchours(datum.value) || utcminutes(datum.value) ? utcFormat(datum.value, '%H:%M')",
  "utcdate(datum.value) !== 1 ? utcFormat(datum.value, datum.index === 0 ? '%e %b %Y' : '%e %b')",
  "utcmonth(datum.value) === 0 ? utcFormat(datum.value, '%Y')",
  "utcFormat(datum.value, datum.index === 0 ? '%b %Y' : '%b')",
].join(" : ");

/** Configuration for the chart library. Ramps are mixed from real colours, one set that reads on both grounds. */
export const chartConfig: Readonly<Record<string, unknown>> = {
  background: null, aria: false, font: chartFont, padding: { left: 2, right: 6, top: 4, bottom: 2 },
  view: { stroke: null, continuousWidth: 300, continuousHeight: 180 },
  axis: {
    domainColor: soft, domainWidth: 1, tickColor: soft, tickSize: 4, gridColor: rule, gridWidth: 1, labelColor: soft, labelFontSize: 11, labelPadding: 4,
    titleColor: soft, titleFontSize: 11, titleFontWeight: "normal", titlePadding: 8, labelOverlap: "greedy", labelFlush: false, labelSeparation: 3,
  },
  axisX: { grid: false }, axisY: { domain: false, ticks: false, tickCount: 5 },
  axisQuantitative: { tickCount: 5 },
  legend: { orient: "top", direction: "horizontal", titleColor: soft, titleFontWeight: "normal", titleFontSize: 11, labelColor: ink, labelFontSize: 11, symbolSize: 70, offset: 6, titleOrient: "left", titleLimit: 0 },
  header: { labelColor: soft, titleColor: soft, labelFontSize: 11, titleFontSize: 11, titleFontWeight: "normal" },
  title: { color: ink, fontSize: 12, fontWeight: "normal", anchor: "start", subtitleColor: soft },
  mark: { color: sample, tooltip: null }, line: { strokeWidth: 1.5, strokeJoin: "round" }, rule: { color: soft }, text: { color: ink, fontSize: 11 }, point: { filled: true, size: 30, opacity: 1 }, circle: { opacity: 1 }, square: { opacity: 1 }, tick: { opacity: 1 }, bar: { color: "var(--bar)" }, area: { color: accent },
  // Styles are worn by lines, bars and points alike, so none names a size: for a line that would be its thickness.
  style: {
    sample: { color: sample, strokeWidth: 1.4, shape: "circle" },
    heldOut: { color: held, strokeWidth: 1.3, strokeDash: [2, 2], filled: false, shape: "circle" },
    model: { color: accent, strokeWidth: 2, shape: "square" },
    band: { color: accent, fillOpacity: 0.17, strokeOpacity: 0.5 },
    limit: { color: "var(--limit)", strokeWidth: 1, strokeDash: [5, 3] },
    mark: { color: "var(--bar)", strokeWidth: 2 },
    outside: { color: alarm, strokeWidth: 2.4, shape: "diamond" },
    guide: { color: "var(--guide)", strokeWidth: 1 },
    label: { color: soft, fontSize: 11 },
    "guide-label": { fill: soft }, "guide-title": { fill: soft }, "group-title": { fill: ink },
  },
  range: { category: categories, symbol: shapes, strokeDash: dashes, ordinal: ["#8fb7b4", "#5f9a97", "#377d7b", "#1d5f60"], ramp: ["#b9d3cf", "#7fb0ac", "#4a8c8a", "#236869"], heatmap: ["#b9d3cf", "#7fb0ac", "#4a8c8a", "#236869"], diverging: ["#a4582f", "#cf9f80", "#b9b9b0", "#7fb0ac", "#236869"] },
};
