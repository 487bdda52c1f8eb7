// The author's choice where the text and the file were changed in the same lines: both are shown, nothing is thrown away unasked.

import type { Region } from "./merge.ts";
import { button } from "./notices.ts";

type Choice = "mine" | "theirs" | "both";

/** Asks for each conflict; the merged text, or null where the author decides later. */
export function choose(dialog: HTMLDialogElement, regions: readonly Region[]): Promise<string | null> {
  return new Promise((resolve) => {
    const picks = new Map<number, Choice>();
    const conflicts = regions.flatMap((region, index) => "agreed" in region ? [] : [index]);
    const use = button("Use this text", () => { dialog.close(); resolve(joined(regions, picks)); }, "first");
    use.disabled = true;
    const picked = (index: number, choice: Choice): void => { picks.set(index, choice); use.disabled = picks.size < conflicts.length; };
    const head = document.createElement("h2");
    head.textContent = conflicts.length === 1 ? "The file was changed in the same place as your text" : `The file was changed in ${conflicts.length} of the places where you changed the text`;
    const lead = document.createElement("p");
    lead.textContent = "Everything else was put together already. Choose for each place; undo brings your own text back.";
    const foot = document.createElement("div");
    foot.className = "choices-foot";
    foot.append(button("Decide later", () => { dialog.close(); resolve(null); }), use);
    dialog.replaceChildren(head, lead, ...conflicts.map((index, place) => drawn(regions[index], place, (choice) => picked(index, choice))), foot);
    dialog.addEventListener("cancel", () => resolve(null), { once: true });
    dialog.showModal();
  });
}

function drawn(region: Region, place: number, picked: (choice: Choice) => void): HTMLElement {
  const group = document.createElement("fieldset");
  const legend = document.createElement("legend");
  legend.textContent = `Place ${place + 1}`;
  group.append(legend);
  if ("agreed" in region) return group;
  const add = (choice: Choice, label: string, text: string | null): void => {
    const row = document.createElement("label"), radio = document.createElement("input"), name = document.createElement("span");
    radio.type = "radio"; radio.name = `place ${place}`; radio.value = choice;
    radio.addEventListener("change", () => picked(choice));
    name.textContent = label;
    row.append(radio, name);
    if (text !== null) {
      const words = document.createElement("pre");
      words.textContent = text === "" ? "(the lines were removed)" : text;
      row.append(words);
    }
    group.append(row);
  };
  add("mine", "Your text here", region.mine);
  add("theirs", "The file on disk", region.theirs);
  add("both", "Both, yours first", null);
  return group;
}

/** The text that the choices make. */
export function joined(regions: readonly Region[], picks: ReadonlyMap<number, Choice>): string {
  return regions.map((region, index) => {
    if ("agreed" in region) return region.agreed;
    const pick = picks.get(index);
    if (pick === "theirs") return region.theirs;
    if (pick === "both") return region.mine + (region.mine === "" || region.mine.endsWith("\n") ? "" : "\n") + region.theirs;
    return region.mine;
  }).join("");
}
