// Playing, standing, jumping, keys.
//
// The round show: run-up to 6 s, deltoid to 12 s, into 3:−1 to 12.2 s, to 18.2 s, dark morph to 22.2 s, 2:−3 to 28.2 s,
// loop morph to 33.2 s = 6 s. The show that plays once: run-up to 6 s, to 11 s, morph to 15 s, to 20 s, run-down to 26 s.

const END = 33.2;

// How many seconds of the show a second of the clock is.
async function pace({ page }) {
  return page.evaluate(
    () =>
      new Promise((done) => {
        const slider = document.getElementById("slider");
        requestAnimationFrame((first) => {
          const from = Number(slider.value);
          const look = (now) => {
            if (now - first < 1500) requestAnimationFrame(look);
            else done((1000 * (Number(slider.value) - from)) / (now - first));
          };
          requestAnimationFrame(look);
        });
      }),
  );
}

export const time = [
  {
    name: "it opens at the first figure and does not play by itself",
    page: "round",
    async check(shown, { same }) {
      await shown.frames(10);
      same(await shown.time(), 6, "time");
      same(await shown.text("play"), "Play", "button");
      same(await shown.text("cue"), "1 First", "cue");
      same(await shown.text("table-time"), "0:00:06.0", "table time");
      same(await shown.text("show-time"), "0:00:00.0", "show time");
      same(await shown.text("ratio"), "1:−2", "ratio");
      same(await shown.attribute("slider", "aria-valuetext"), "0:00:06.0, cue 1, First, stands", "what the slider says");
    },
  },
  {
    name: "it plays as fast as the clock, and ten times as fast, and pauses",
    page: "round",
    async check(shown, { same, holds }) {
      await shown.page.click("#play");
      same(await shown.text("play"), "Pause", "button");
      // A frame that is more than half a second late is not made up for, and numbers are those of the frame before; so a
      // busy machine may play slower, but never faster than that.
      const once = await pace(shown);
      holds(once > 0.5 && once < 1.1, `pace ${once}`);
      await shown.page.locator("#rates label", { hasText: "10×" }).click();
      const ten = await pace(shown);
      holds(ten > 5 && ten < 11, `pace ${ten} at 10×`);
      await shown.page.locator("#rates label", { hasText: "¼×" }).click();
      const quarter = await pace(shown);
      holds(quarter > 0.1 && quarter < 0.3, `pace ${quarter} at ¼×`);
      await shown.page.click("#play");
      same(await shown.text("play"), "Play", "button");
      await shown.frames(3);
      const stopped = await shown.time();
      await shown.frames(20);
      same(await shown.time(), stopped, "time while it stands");
    },
  },
  {
    name: "the slider goes anywhere, and everything tells the moment",
    page: "round",
    async check(shown, { same }) {
      await shown.scrub(20.2);
      same(await shown.text("cue"), "3 2:-3", "cue");
      same(await shown.text("doing"), "changes into it, 50 %", "what happens");
      same(await shown.text("way"), "4 s quintic, dark", "the way into it");
      same(await shown.text("beam"), "off: the grey line is where it would be", "beam");
      same(await shown.page.locator("#cues tr[aria-current=true] th").textContent(), "3", "marked row");
      await shown.scrub(15);
      same(await shown.text("beam"), "50 %", "beam");
      same(await shown.text("motor-a"), "9000 rpm, 0 % acc.", "motor a");
      same(await shown.text("motor-b"), "3000 rpm, 0 % acc.", "motor b");
      same(await shown.attribute("slider", "aria-valuetext"), "0:00:15.0, cue 2, 3:-1, stands", "what the slider says");
    },
  },
  {
    name: "keys, wherever the focus is",
    page: "round",
    async check(shown, { same, near }) {
      const { keyboard } = shown.page;
      const press = async (key) => {
        await keyboard.press(key);
        await shown.frames(2);
      };
      for (const [key, want] of [["ArrowRight", 7], ["ArrowLeft", 6], ["Shift+ArrowRight", 16], ["Shift+ArrowLeft", 6], ["Home", 0], ["ArrowLeft", 0], ["End", END], ["ArrowRight", END]]) {
        await press(key);
        near(await shown.time(), want, 1e-9, key);
      }
      for (const place of ["body", "#play", "#next", "#slider"]) {
        if (place !== "body") await shown.page.focus(place);
        await shown.scrub(7);
        if (place !== "body") await shown.page.focus(place);
        await press("ArrowRight");
        near(await shown.time(), 8, 1e-9, `ArrowRight on ${place}`);
      }
      for (const place of ["#play", "#slider"]) {
        await shown.page.focus(place);
        await press("Space");
        same(await shown.text("play"), "Pause", `Space on ${place}`);
        await press("Space");
        same(await shown.text("play"), "Play", `Space again on ${place}`);
      }
      await shown.scrub(7);
      await shown.page.focus("#slider");
      for (const [key, want] of [["ArrowUp", 8], ["ArrowDown", 7], ["PageDown", 12.2], ["PageDown", 22.2], ["PageUp", 12.2], ["PageUp", 6]]) {
        await press(key);
        near(await shown.time(), want, 1e-9, `${key} on the slider`);
      }
    },
  },
  {
    name: "keys that a control needs stay its own",
    page: "round",
    async check(shown, { same, near }) {
      const { keyboard } = shown.page;
      await shown.page.focus("#chooser");
      await keyboard.press("ArrowDown");
      await shown.frames(2);
      near(await shown.time(), 12.2, 1e-9, "the list of cues goes to its next one, no second further");
      await shown.page.focus("#rates input:checked");
      await keyboard.press("ArrowRight");
      await shown.frames(2);
      near(await shown.time(), 12.2, 1e-9, "speeds are chosen without going on");
      same(await shown.page.locator("#rates input:checked").getAttribute("value"), "2", "speed");
      await shown.page.focus("#next");
      await keyboard.press("Space");
      await shown.frames(2);
      near(await shown.time(), 22.2, 1e-9, "Space on a button presses it");
      same(await shown.text("play"), "Play", "and does not play");
      await keyboard.press("Control+ArrowLeft");
      await shown.frames(2);
      near(await shown.time(), 22.2, 1e-9, "the browser's own keys stay");
    },
  },
  {
    name: "a loop goes round at its seam, or stops there",
    page: "round",
    async check(shown, { same, near }) {
      await shown.scrub(END - 0.3);
      await shown.page.click("#play");
      await shown.reaches(6, 12);
      same(await shown.text("play"), "Pause", "plays on");
      await shown.page.click("#play");
      await shown.page.uncheck("#loops");
      await shown.scrub(END - 0.3);
      await shown.page.click("#play");
      await shown.page.waitForFunction(() => document.getElementById("play").textContent === "Play");
      await shown.frames(2);
      near(await shown.time(), END, 1e-9, "stands at the end");
      await shown.page.click("#play");
      await shown.reaches(6, 12);
    },
  },
  {
    name: "a show with a run-down ends at rest, and starts again from row 0",
    page: "once",
    async check(shown, { same, holds, near }) {
      holds(await shown.page.locator("#loops").isHidden(), "there is no loop to choose");
      await shown.scrub(25.7);
      await shown.page.click("#play");
      await shown.page.waitForFunction(() => document.getElementById("play").textContent === "Play");
      await shown.frames(2);
      near(await shown.time(), 26, 1e-9, "time");
      same(await shown.text("doing"), "at rest", "what happens");
      same(await shown.text("motor-a"), "0 rpm, 0 % acc.", "motor a");
      await shown.page.click("#play");
      await shown.reaches(0.01, 6);
    },
  },
  {
    name: "cues are reached by list, table and buttons",
    page: "round",
    async check(shown, { near }) {
      const at = async (want, what) => {
        await shown.frames(2);
        near(await shown.time(), want, 1e-9, what);
      };
      await shown.page.selectOption("#chooser", "3");
      await at(22.2, "list");
      await shown.page.click("#previous");
      await at(12.2, "previous");
      await shown.page.click("#next");
      await at(22.2, "next");
      await shown.page.getByRole("button", { name: "go to cue 1, First" }).click();
      await at(6, "table");
    },
  },
  {
    name: "findings are marked at their moment, with their words, and lead there",
    page: "round",
    async check(shown, { near, holds }) {
      const mark = shown.page.locator("#marks button.error").first();
      const words = await mark.getAttribute("aria-label");
      holds(/^error at 0:00:12\.1, cue 2, morph: rotor . would need/.test(words), words);
      await mark.focus();
      holds((await shown.text("mark-words")) === words, "the words show when the mark has the focus");
      await mark.press("Enter");
      await shown.frames(2);
      near(await shown.time(), 12.1, 1e-9, "the middle of the morph");
      await shown.scrub(20);
      await shown.page.locator("#findings li.error button").first().click();
      await shown.frames(2);
      near(await shown.time(), 12.1, 1e-9, "the list leads there too");
      holds((await shown.page.locator("#findings").textContent()).includes("limit/acceleration"), "the code is in the list");
    },
  },
  {
    name: "three thousand cues stay usable",
    page: "many",
    async check(shown, { same, holds }) {
      same(await shown.page.locator("#cues tr").count(), 200, "rows at a time");
      await shown.page.keyboard.press("End");
      await shown.page.click("#previous");
      await shown.frames(2);
      holds((await shown.text("cue")).startsWith("3000 "), await shown.text("cue"));
      await shown.page.locator("#chooser").fill("1234");
      await shown.page.locator("#chooser").press("Enter");
      await shown.frames(2);
      holds((await shown.text("cue")).startsWith("1234 "), await shown.text("cue"));
      await shown.page.click("#cues-after");
      same(await shown.text("cues-shown"), "cues 201 to 400 of 3000", "pages of the table");
      await shown.page.locator("#rates label", { hasText: "10×" }).click();
      await shown.page.click("#play");
      // As it plays on into the next cue, the table turns to the page with it.
      await shown.page.waitForFunction(() => Number(document.querySelector("#cues tr[aria-current=true] th")?.textContent) > 1234);
    },
  },
  {
    name: "titles are text, whatever they say",
    page: "hostile",
    async check(shown, { holds }) {
      const title = await shown.page.title();
      holds(title.startsWith("</script><script>"), title);
      holds((await shown.text("cue")).includes("<img src=x"), await shown.text("cue"));
      holds((await shown.page.locator("img").count()) === 0, "no picture was made of a title");
    },
  },
];
