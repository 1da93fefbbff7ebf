// The report in a real browser: node report.mjs REPORT.html SCREENSHOTS [COMPARISON.html]
//
// REPORT has three sites and splits. Chromium is Debian's; nothing is fetched. Each check prints a
// line, the last line counts them. Screenshots are left in the folder SCREENSHOTS, to be looked at.

import { mkdirSync, readFileSync } from "node:fs";
import { createRequire } from "node:module";
import { resolve } from "node:path";
import { pathToFileURL } from "node:url";
import { chromium } from "playwright-core";

const [report, screenshots, comparison] = process.argv.slice(2);
const axe = readFileSync(createRequire(import.meta.url).resolve("axe-core/axe.min.js"), "utf8");
const executablePath = process.env.CHROMIUM ?? "/usr/bin/chromium";
const INTERACTIVE_MS = 1000;

let passed = 0;
let failed = 0;
const check = (what, holds, seen = "") => {
  holds ? passed++ : failed++;
  console.log(`${holds ? "ok  " : "FAIL"}  ${what}${holds ? "" : `: ${seen}`}`);
};

const browser = await chromium.launch({
  executablePath,
  args: ["--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run",
    "--disable-background-networking", "--disable-component-update", "--disable-sync"],
});

/** Opens a page; what it says on the console and asks the network for is an error. */
const open = async (file, options = {}) => {
  const context = await browser.newContext({ viewport: { width: 1280, height: 900 }, ...options });
  const page = await context.newPage();
  const wrong = [];
  page.on("console", (message) => wrong.push(message.text()));
  page.on("pageerror", (error) => wrong.push(error.message));
  page.on("request", (request) => {
    if (!/^(file|data|about):/.test(request.url())) wrong.push(`asks for ${request.url()}`);
  });
  await page.goto(pathToFileURL(resolve(file)).href);
  return { page, context, wrong };
};

/** When the page's script had run and keys were answered, in ms from the start of loading. */
const interactive = (page) => page.evaluate(
  () => Math.round(performance.getEntriesByType("navigation")[0].domContentLoadedEventEnd));

const again = async (page) => {
  await page.reload();
  return interactive(page);
};

const violations = async (page) => {
  await page.evaluate(axe);
  const found = await page.evaluate(() => window.axe.run());
  return found.violations.map((v) => `${v.id}: ${v.nodes.map((n) => n.target).join(" ")}`);
};

/** What makes the page wider than its window, if it is. */
const tooWide = () => {
  if (document.documentElement.scrollWidth <= window.innerWidth) return [];
  const scrolls = (element) => element.closest(".scroll, pre");
  return [...document.body.querySelectorAll("*")]
    .filter((element) => !scrolls(element) && element.getBoundingClientRect().right > window.innerWidth)
    .map((element) => element.tagName + (element.id && `#${element.id}`));
};

mkdirSync(screenshots, { recursive: true });
const shot = (page, name) => page.screenshot({ path: `${screenshots}/${name}.png`, fullPage: true });

for (const colorScheme of ["light", "dark"]) {
  const { page, context, wrong } = await open(report, { colorScheme });
  const title = () => page.locator("#step-title").textContent();
  const picture = () => page.locator("#picture").innerHTML();
  const count = await page.locator("#steps button").count();

  // By the page's own clock, best of three: the machine may be busy with other things.
  const took = Math.min(await interactive(page), await again(page), await again(page));
  // Told, not asserted: how busy the machine is must not decide a merge.
  const verdict = took < INTERACTIVE_MS ? "within a second" : "SLOWER than a second";
  console.log(`${colorScheme}: interactive ${verdict} (${took} ms)`);
  const finished = await title();
  const before = await picture();
  await page.keyboard.press("ArrowLeft");
  check(`${colorScheme}: a key steps back`, (await picture()) !== before);

  for (let at = 0; at < count; at++) await page.keyboard.press("ArrowLeft");
  check(`${colorScheme}: the first step is the wafer`, (await title()) === "wafer", await title());
  check(`${colorScheme}: no step before it`, await page.locator("#back").isDisabled());
  const seen = new Set([await title()]);
  for (let at = 1; at < count; at++) {
    await page.keyboard.press("ArrowRight");
    seen.add(await title());
  }
  check(`${colorScheme}: every step is reached by key`, seen.size === count, [...seen]);

  const slider = page.locator("#step");
  await slider.focus();
  await page.keyboard.press("Home");
  check(`${colorScheme}: the slider steps`, (await title()) === "wafer", await title());
  const spoken = await slider.getAttribute("aria-valuetext");
  check(`${colorScheme}: the slider says its step`, spoken === "wafer", spoken);
  await page.keyboard.press("End");

  const sites = page.locator("[data-reel]");
  const first = await picture();
  await sites.nth(1).click();
  check(`${colorScheme}: another site is another picture`, (await picture()) !== first);
  check(`${colorScheme}: it is told`, (await sites.nth(1).getAttribute("aria-pressed")) === "true");
  await page.keyboard.press("ArrowDown");
  check(`${colorScheme}: a key chooses the next site`, (await sites.nth(2).getAttribute("aria-pressed")) === "true");
  await sites.nth((await sites.count()) - 1).click();
  check(`${colorScheme}: splits are sites too`, (await sites.last().textContent()).includes("·"));
  await sites.first().click();
  await page.locator("#steps button").nth(1).click();
  check(`${colorScheme}: a step is chosen by its name`, (await title()) !== finished);
  await page.locator("#steps button").last().click();

  const wide = await page.evaluate(tooWide);
  check(`${colorScheme}: the page does not scroll sideways`, wide.length === 0, wide.join(" "));
  const found = await violations(page);
  check(`${colorScheme}: accessible as far as axe can tell`, found.length === 0, found.join("; "));
  check(`${colorScheme}: nothing on the console, nothing from the network`, wrong.length === 0, wrong.join("; "));
  await shot(page, `report-${colorScheme}`);
  if (colorScheme === "light") {
    await page.emulateMedia({ media: "print" });
    check("print: no buttons", !(await page.locator(".sites").isVisible()));
    const printed = page.locator(".finished figure svg");
    check("print: every finished section is there", (await printed.count()) === (await sites.count())
      && await printed.last().isVisible());
    await shot(page, "report-print");
    await page.pdf({ path: `${screenshots}/report.pdf`, format: "A4" });
  }
  await context.close();
}

{
  const { page, context } = await open(report, { viewport: { width: 390, height: 800 } });
  const wide = await page.evaluate(tooWide);
  check("narrow: the page does not scroll sideways", wide.length === 0, wide.join(" "));
  await shot(page, "report-narrow");
  await context.close();
}

{
  const { page, context } = await open(report, { javaScriptEnabled: false });
  check("without script: the finished section is there", await page.locator("#picture svg").isVisible());
  await context.close();
}

if (comparison) {
  const { page, context, wrong } = await open(comparison);
  check("comparison: two sections side by side", (await page.locator(".beside figure").count()) >= 2);
  const found = await violations(page);
  check("comparison: accessible as far as axe can tell", found.length === 0, found.join("; "));
  check("comparison: nothing on the console", wrong.length === 0, wrong.join("; "));
  await shot(page, "comparison");
  await context.close();
}

await browser.close();
console.log(`browser: ${passed} passed, ${failed} failed`);
process.exit(failed === 0 ? 0 : 1);
