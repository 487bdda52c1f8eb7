// The document of the page's frame: the engine's program, the page's script and nothing else, under its own policy.

import { inlineSafe, pagePolicy } from "./policy.ts";

/** Starts the engine before the page's script, which is larger, has been read: both are then made ready side by side. */
const boot = 'var lagbookEngine = new Worker(URL.createObjectURL(new Blob([document.getElementById("engine").textContent], { type: "text/javascript" })));';

/** @param engine the worker's program: a classic script */
export function frameDocument(pageScript: string, engine: string): string {
  const scripts = [boot, inlineSafe(pageScript)];
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="${pagePolicy(scripts)}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>Page</title>
</head>
<body><script type="text/plain" id="engine">${inlineSafe(engine)}</script>
${scripts.map((script) => `<script>${script}</script>`).join("\n")}</body>
</html>
`;
}

/** The scripts of a document that this file made, as they are hashed. */
export function scriptsOf(document: string): readonly string[] {
  const scripts = [...document.matchAll(/<script>([\s\S]*?)<\/script>/g)].map((match) => match[1]);
  if (scripts.length !== 2) throw new Error(`the frame's document has ${scripts.length} scripts, expected 2`);
  return scripts;
}
