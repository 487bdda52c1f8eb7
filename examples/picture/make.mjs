// Makes the README's picture from the real product: `npm run build && node examples/picture/make.mjs`.

import { spawn } from "node:child_process";
import { chromium } from "playwright-core";
import { chromiumPath } from "../../test/prepare.mjs";

const top = new URL("../..", import.meta.url).pathname;
const host = spawn(process.execPath, [`${top}.build/lagbook.js`, "open", `${top}examples/ferry.md`], { stdio: ["ignore", "pipe", "inherit"] });
const address = await new Promise((found) => {
  let said = "";
  host.stdout.on("data", (bytes) => {
    said += bytes;
    const match = /http:\/\/127\.0\.0\.1:\S+/.exec(said);
    if (match) found(match[0]);
  });
});
const browser = await chromium.launch({ executablePath: chromiumPath(), args: ["--no-sandbox", "--disable-gpu", "--no-first-run", "--disable-background-networking"] });
try {
  const page = await browser.newPage({ viewport: { width: 1360, height: 860 }, colorScheme: "light" });
  await page.goto(address);
  const frame = await (await page.waitForSelector("#frame", { state: "attached" })).contentFrame();
  await frame.waitForSelector("[data-state=current]");
  await frame.waitForFunction(() => document.querySelector("[data-state=working], [data-state=waiting]") === null);
  // The fit beside its source: the page goes where the text is clicked, and the text where the page is.
  await frame.locator("#cell-model .cell-name").click();
  await frame.locator("#cell-model").evaluate((cell) => cell.scrollIntoView({ block: "start" }));
  await page.waitForTimeout(1500);
  await page.screenshot({ path: `${top}examples/picture/desk.png` });
} finally {
  await browser.close();
  host.kill();
}
