// The document of the page's frame: the page's script and nothing else, under its own policy.

import { inlineSafe, pagePolicy } from "./policy.ts";

export function frameDocument(pageScript: string): string {
  const script = inlineSafe(pageScript);
  return `<!doctype html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta http-equiv="Content-Security-Policy" content="${pagePolicy([script])}">
<meta name="viewport" content="width=device-width, initial-scale=1">
<title>Page</title>
</head>
<body><script>${script}</script></body>
</html>
`;
}

/** The scripts of a document that this file made, as they are hashed. */
export function scriptOf(document: string): string {
  const match = /<script>([\s\S]*?)<\/script>/.exec(document);
  if (!match) throw new Error("the frame's document has no script");
  return match[1];
}
