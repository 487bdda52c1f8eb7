// What axe finds wrong for readers with other senses or means, where it is serious.

import axe from "axe-core";
import type { Frame, Page } from "playwright-core";

interface Violation { readonly id: string; readonly impact: string; readonly nodes: readonly { readonly html: string; readonly failureSummary: string }[] }

/** Each serious or critical fault of one document with its places; frames inside it are asked for themselves. */
export async function seriousFaults(document: Page | Frame): Promise<readonly string[]> {
  await document.evaluate(axe.source);
  return document.evaluate(async () => {
    const { axe: run } = window as unknown as { axe: { run(context: object, options: object): Promise<{ violations: Violation[] }> } };
    const { violations } = await run.run({ include: [["body"]] }, { iframes: false, resultTypes: ["violations"] });
    return violations.filter(({ impact }) => impact === "serious" || impact === "critical")
      .map(({ id, nodes }) => `${id}: ${nodes.map(({ html, failureSummary }) => `${html.slice(0, 160)} ${failureSummary.slice(0, 200)}`).join(" | ")}`);
  });
}
