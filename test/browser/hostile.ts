// A notebook whose author means harm: every way that is known to run code, to load something or to lead away, in prose and in cells.

import { createServer } from "node:net";
import type { AddressInfo } from "node:net";

/** A server that nobody should ever ask: it counts whoever does. (A browser may open a connection before it looks at what a page
 *  may do, and close it without a word.) */
export async function canary(): Promise<{ readonly url: string; readonly met: readonly string[]; close(): void }> {
  const met: string[] = [];
  const server = createServer((socket) => {
    socket.on("data", (bytes: Buffer) => { met.push(bytes.toString("latin1").split("\r\n")[0]); socket.end("HTTP/1.1 200 OK\r\nAccess-Control-Allow-Origin: *\r\nContent-Length: 0\r\n\r\n"); }).on("error", () => undefined);
  });
  await new Promise<void>((done) => { server.listen(0, "127.0.0.1", done); });
  return { url: `http://127.0.0.1:${(server.address() as AddressInfo).port}`, met, close: () => { server.close(); } };
}

/** Says that code of the notebook has run: in its own window and to the one around it. */
const owned = "window.owned=1;try{parent.owned=1}catch(e){};parent.postMessage({page:'owned'},'*')";

export function hostileText(away: string): string {
  const markup = [
    `<script>${owned};fetch('${away}/script')</script>`, `<img src="${away}/img.png" onerror="${owned}">`, `<img src=x onerror="${owned}">`, `<svg onload="${owned}"><script href="${away}/s.js"></script></svg>`,
    `<svg><foreignObject><iframe src="${away}/foreign"></iframe></foreignObject><image href="${away}/svg.png"/><use href="${away}/use.svg#a"/><animate onbegin="${owned}" attributeName="x"/></svg>`,
    `<math><mtext><table><mglyph><style><img src=x onerror="${owned}"></style></mglyph></table></mtext><maction actiontype="statusline" xlink:href="javascript:${owned}">x</maction></math>`,
    `<iframe src="${away}/frame"></iframe><iframe srcdoc="<script>${owned}</script>"></iframe>`, `<form action="${away}/form"><input name=a autofocus onfocus="${owned}"><button formaction="javascript:${owned}">b</button></form>`,
    `<meta http-equiv="refresh" content="0;url=${away}/meta">`, `<link rel="stylesheet" href="${away}/l.css"><link rel="prefetch" href="${away}/prefetch"><link rel="preconnect" href="${away}"><link rel="dns-prefetch" href="${away}"><base href="${away}/">`,
    `<style>@import url("${away}/import.css");body{background:url("${away}/style.png")}</style><p style="background:url(${away}/inline.png)">x</p>`,
    `<object data="${away}/object"></object><embed src="${away}/embed"><video poster="${away}/poster" src="${away}/video" autoplay></video><audio src="${away}/audio" autoplay></audio>`,
    `<details open ontoggle="${owned}"><summary>s</summary></details><body onload="${owned}"><marquee onstart="${owned}">`,
  ];
  const picture = `<svg xmlns="http://www.w3.org/2000/svg" onload="${owned}"><script>${owned}</script><image href="${away}/inner.png"/></svg>`;
  const name = `<img src=${away}/name.png onerror=${owned}>`, quoted = JSON.stringify(name), destination = name.replace(/[<>]/g, "\\$&");
  return `# Harm <img src=${away}/title.png onerror="${owned}">

${markup.join("\n\n")}

Inline ${markup.map((each) => each.replaceAll("\n", " ")).join(" and ")}.

| head ${name.replaceAll("|", "")} |
| --- |
| cell <script>${owned}</script> |

![loaded](${away}/markdown.png) ![data](data:image/svg+xml;base64,${Buffer.from(picture).toString("base64")}) ![reference][far]

[code](javascript:${owned.replaceAll(/[()]/g, "\\$&")}) [CODE](JaVaScRiPt:void\\(0\\)) [data](data:text/html,<script>${owned}</script>) [old](vbscript:x) [file](file:///etc/passwd) [far][far] [spaced](<\u0001javascript:alert(1)>) <javascript:alert(1)> [plain](${away}/link)

[far]: ${away}/far.png "${name.replaceAll('"', "'")}"

$\\href{javascript:alert(1)}{x} \\includegraphics{${away}/tex.png} \\url{${away}/u}$ $\\htmlStyle{background:url(${away}/h.png)}{x} \\class{a" onclick="${owned}}{y}$ $\\text{<img src=x onerror=${owned}>}$

A number: [0](<="${name.replace(/[<>"]/g, (sign) => (sign === '"' ? '\\\\"' : `\\${sign}`))}">) and [${"x"}](<=1> "${destination.replaceAll('"', "'")}").

\`\`\`load: sold
file: "sold.csv"
value: {own: ${quoted}}
unit: ${quoted}
\`\`\`

\`\`\`load: plain
file: "plain.csv"
unit: ${quoted}
\`\`\`

\`\`\`load: network
file: "${away}/data.csv"
\`\`\`

\`\`\`load: outside
file: "../outside.csv"
\`\`\`

\`\`\`load: linked
file: "linked.csv"
\`\`\`

\`\`\`load: passwords
file: "/etc/passwd"
\`\`\`

\`\`\`slider: q
from: 0
to: 4
at: 1
label: ${quoted}
\`\`\`

\`\`\`choice: pick
among: [${quoted}, "javascript:alert(1)"]
label: "</label><script>${owned}</script>"
\`\`\`

\`\`\`values: named
markup: ${quoted}
constructor: 1
toString: 2
hasOwnProperty: 3
\`\`\`

\`\`\`claims:
${quoted}: q > 0
\`\`\`

\`\`\`table: rows
rows: [{${quoted}: ${quoted}, b: "</td><script>${owned}</script>"}]
\`\`\`

\`\`\`chart: titled
title: ${quoted}
description: "\\" onload=\\"${owned}"
data: [{a: 1, b: ${quoted}, u: "${away}/mark.png", j: "javascript:${owned}"}]
layer: [{mark: {type: "text", font: "x; background: url(${away}/font.png)"}, encoding: {text: {field: "b"}, tooltip: {field: "b"}, href: {field: "j"}, url: {field: "u"}}}, {mark: {type: "point", fill: "url(${away}/fill.svg#a)", cursor: "url(${away}/cursor.png), auto"}}]
encoding: {x: {field: "a", type: "quantitative", title: ${quoted}}, y: {field: "b", type: "nominal", axis: {labelFont: "</text><script>${owned}</script>"}}}
config: {background: "url(${away}/config.png)", style: {x: {font: "a\\"onload=\\"${owned}"}}}
\`\`\`

\`\`\`chart: pictures
data: [{a: 1, u: "${away}/image.png"}]
mark: {type: "image", width: 20, height: 20}
encoding: {x: {field: "a", type: "quantitative"}, url: {field: "u", type: "nominal"}}
\`\`\`

\`\`\`chart: fetching
data: {url: "${away}/chart.json"}
mark: "point"
encoding: {x: {field: "a", type: "quantitative"}}
\`\`\`

\`\`\`fit: ${"model"}
series: plain
ma: q
label: ${quoted}
\`\`\`

\`\`\`forecast: ahead
model: model
horizon: 3
\`\`\`
`;
}

/** A data file with markup in its header, and one whose values carry some. */
export function hostileFiles(away: string): Readonly<Record<string, string>> {
  const name = `<img src=${away}/name.png onerror=${owned}>`, months = Array.from({ length: 30 }, (_, i) => `${2019 + Math.floor(i / 12)}-${String((i % 12) + 1).padStart(2, "0")}`);
  return {
    "sold.csv": [`month,"${name}",__proto__`, ...months.map((month, i) => `${month},${i},1`)].join("\n"),
    "plain.csv": ["month,n", ...months.map((month, i) => `${month},${(10 + i + 3 * Math.sin(i * 7)).toFixed(2)}`)].join("\n"),
  };
}
