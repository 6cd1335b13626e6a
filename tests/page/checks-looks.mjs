// How the page reads and fits: contrast and names, little motion, narrow windows.

import { readFileSync } from "node:fs";
import { createRequire } from "node:module";

const AXE = readFileSync(createRequire(import.meta.url).resolve("axe-core/axe.min.js"), "utf8");

// Everything that axe-core knows, best practices too. The page's policy runs no foreign script; the driver's own does not
// ask it.
async function violations({ page }) {
  await page.evaluate(AXE);
  const { violations: found } = await page.evaluate(() => globalThis.axe.run());
  return found.map(({ id, help, nodes }) => `${id}: ${help}: ${nodes.map((node) => node.html.slice(0, 120)).join(" | ")}`);
}

function reads(scheme, page) {
  return {
    name: `axe-core finds nothing on ${page}, ${scheme}`,
    page,
    options: { colorScheme: scheme },
    async check(shown, { same }) {
      same((await violations(shown)).join("\n"), "", "standing");
      if (page === "many") return;
      await shown.page.click("#play");
      await shown.page.locator("#marks button").first().hover();
      same((await violations(shown)).join("\n"), "", "playing");
    },
  };
}

function fits(width, height, scale) {
  return {
    name: `nothing sticks out of a window of ${width} × ${height}`,
    page: "hostile",
    options: { viewport: { width, height }, deviceScaleFactor: scale },
    async check(shown, { holds }) {
      await shown.frames(3);
      const wide = await shown.page.evaluate(() => document.documentElement.scrollWidth);
      holds(wide <= width, `${wide} pixels wide`);
      const [side, wanted] = await shown.page.evaluate((most) => {
        const wall = document.getElementById("wall");
        return [wall.width, Math.min(wall.clientWidth * most, 1000)];
      }, Math.min(scale, 2));
      holds(Math.abs(side - wanted) <= 1, `${side} pixels of canvas for ${wanted}`);
    },
  };
}

export const looks = [
  reads("light", "round"),
  reads("dark", "round"),
  reads("dark", "many"),
  fits(320, 640, 1),
  fits(360, 740, 3),
  fits(1000, 700, 1),
  fits(1600, 1000, 2),
  {
    name: "little motion: pictures change twice a second, no more",
    page: "round",
    options: { reducedMotion: "reduce" },
    async check(shown, { same, holds }) {
      await shown.page.evaluate(() => {
        globalThis.drawn = 0;
        const put = CanvasRenderingContext2D.prototype.putImageData;
        CanvasRenderingContext2D.prototype.putImageData = function (...all) {
          globalThis.drawn += 1;
          return put.apply(this, all);
        };
      });
      await shown.frames(5);
      same(await shown.page.evaluate(() => globalThis.drawn), 0, "pictures before it plays");
      await shown.page.click("#play");
      const [drawn, seconds] = await shown.page.evaluate(
        () =>
          new Promise((done) => {
            globalThis.drawn = 0;
            requestAnimationFrame((first) => {
              const look = (now) => {
                if (now - first < 3000) requestAnimationFrame(look);
                else done([globalThis.drawn, (now - first) / 1000]);
              };
              requestAnimationFrame(look);
            });
          }),
      );
      holds(drawn >= 2 && drawn <= 2 * seconds + 1, `${drawn} pictures in ${seconds} s`);
    },
  },
];
