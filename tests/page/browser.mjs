// Opens pages in Chromium and looks at what they do: node browser.mjs CHROMIUM FOLDER
//
// Every check gets a page of its own, and may give back what it measured. Nothing waits for a fixed time where it can wait for something to be so; what must not
// happen is awaited for some frames.

import { chromium } from "playwright-core";
import { pathToFileURL } from "node:url";
import { join } from "node:path";
import { light } from "./checks-light.mjs";
import { looks } from "./checks-looks.mjs";
import { time } from "./checks-time.mjs";

const [executablePath, folder] = process.argv.slice(2);
const ARGUMENTS = [
  "--headless", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking",
  "--disable-component-update", "--disable-sync",
];

// A page with what the checks ask of it.
class Shown {
  constructor(page) {
    this.page = page;
    this.troubles = [];
    page.on("console", (message) => this.troubles.push(`console: ${message.text()}`));
    page.on("pageerror", (error) => this.troubles.push(`error: ${error.stack}`));
    page.on("dialog", (dialog) => this.troubles.push(`dialog: ${dialog.message()}`));
    page.on("request", (request) => {
      if (request.url() !== this.url && request.url() !== "data:,") this.troubles.push(`request: ${request.url()}`);
    });
  }

  async open(name) {
    this.url = pathToFileURL(join(folder, `${name}.html`)).href;
    await this.page.goto(this.url);
    await this.page.waitForFunction(() => document.getElementById("slider").getAttribute("aria-valuetext"));
  }

  time() {
    return this.page.evaluate(() => Number(document.getElementById("slider").value));
  }

  // Waits until the time is within these bounds.
  async reaches(least, most = Infinity) {
    await this.page.waitForFunction(
      ([low, high]) => {
        const now = Number(document.getElementById("slider").value);
        return now >= low && now <= high;
      },
      [least, most],
      { timeout: 30000 },
    );
  }

  // Waits until some more frames were drawn.
  frames(count) {
    return this.page.evaluate(
      (wanted) =>
        new Promise((done) => {
          const next = (left) => (left === 0 ? done() : requestAnimationFrame(() => next(left - 1)));
          next(wanted);
        }),
      count,
    );
  }

  async scrub(to) {
    await this.page.locator("#slider").fill(String(to));
    await this.frames(2);
  }

  text(id) {
    return this.page.locator(`#${id}`).textContent();
  }

  attribute(id, name) {
    return this.page.locator(`#${id}`).getAttribute(name);
  }
}

function same(got, want, what) {
  if (got !== want) throw new Error(`${what}: ${JSON.stringify(got)}, not ${JSON.stringify(want)}`);
}

function near(got, want, within, what) {
  if (!(Math.abs(got - want) <= within)) throw new Error(`${what}: ${got}, not ${want} within ${within}`);
}

function holds(condition, what) {
  if (!condition) throw new Error(what);
}

const browser = await chromium.launch({ executablePath, args: ARGUMENTS });
let failed = 0;
for (const { name, page: file, options = {}, check } of [...time, ...light, ...looks]) {
  const context = await browser.newContext({ viewport: { width: 1100, height: 900 }, ...options });
  const page = await context.newPage();
  page.setDefaultTimeout(30000);
  const shown = new Shown(page);
  const began = Date.now();
  try {
    await shown.open(file);
    const measured = await check(shown, { same, near, holds });
    same(shown.troubles.join("\n"), "", "console, errors, dialogs, requests");
    console.log(`passed: ${name}, ${Date.now() - began} ms${measured ? `, ${measured}` : ""}`);
  } catch (error) {
    failed += 1;
    console.log(`FAILED: ${name}: ${error.stack}`);
  }
  await context.close();
}
await browser.close();
console.log(failed === 0 ? "all checks passed" : `${failed} checks failed`);
process.exit(failed === 0 ? 0 : 1);
