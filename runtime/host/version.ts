// Lagbook's own version, put here by the bundler; "source" when the source itself runs (in tests).

declare const LAGBOOK_VERSION: string | undefined;

export const version: string = typeof LAGBOOK_VERSION === "string" ? LAGBOOK_VERSION : "source";
