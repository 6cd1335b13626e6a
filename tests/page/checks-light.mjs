// What stands on the canvas.

// Pictures stay in the page, by name; only what is said of them comes out.
function install({ page }) {
  return page.evaluate(() => {
    const pictures = {};

    // The light of each pixel: the sum of its colours, 0 to 765.
    function take(name) {
      const wall = document.getElementById("wall");
      const copy = new OffscreenCanvas(wall.width, wall.height).getContext("2d", { willReadFrequently: true });
      copy.drawImage(wall, 0, 0);
      const { data } = copy.getImageData(0, 0, wall.width, wall.height);
      const light = new Float64Array(data.length / 4);
      light.forEach((_, at) => (light[at] = data[4 * at] + data[4 * at + 1] + data[4 * at + 2]));
      pictures[name] = { side: wall.width, light };
      return light.reduce((most, value) => Math.max(most, value), 0);
    }

    // How well a picture fits another one that is turned about the middle: the correlation over the disc, 1 for the same
    // picture, 0 for one that has nothing to do with it.
    function fit(one, two, degrees) {
      const { side, light } = pictures[one];
      const angle = (degrees * Math.PI) / 180;
      const [sin, cos, middle] = [Math.sin(angle), Math.cos(angle), side / 2];
      const [xs, ys] = [[], []];
      for (let row = 0; row < side; row += 1) {
        for (let column = 0; column < side; column += 1) {
          const [dx, dy] = [column + 0.5 - middle, row + 0.5 - middle];
          if (dx * dx + dy * dy > (middle - 2) ** 2) continue;
          xs.push(light[row * side + column]);
          ys.push(between(pictures[two], middle + cos * dx - sin * dy - 0.5, middle + sin * dx + cos * dy - 0.5));
        }
      }
      return correlation(xs, ys);
    }

    function correlation(xs, ys) {
      const mean = (values) => values.reduce((sum, value) => sum + value, 0) / values.length;
      const [x, y] = [mean(xs), mean(ys)];
      const sum = (term) => xs.reduce((total, _, at) => total + term(xs[at] - x, ys[at] - y), 0);
      return sum((dx, dy) => dx * dy) / Math.sqrt(sum((dx) => dx * dx) * sum((_, dy) => dy * dy));
    }

    // Straight between four pixels.
    function between({ side, light }, x, y) {
      const [left, top] = [Math.floor(x), Math.floor(y)];
      const [u, v] = [x - left, y - top];
      const at = (column, row) => light[row * side + column] ?? 0;
      const line = (row) => at(left, row) * (1 - u) + at(left + 1, row) * u;
      return line(top) * (1 - v) + line(top + 1) * v;
    }

    globalThis.looking = { take, fit };
  });
}

// Takes a picture under a name; gives its brightest light.
function picture({ page }, name) {
  return page.evaluate((own) => globalThis.looking.take(own), name);
}

function fit({ page }, one, two, degrees = 0) {
  return page.evaluate((all) => globalThis.looking.fit(...all), [one, two, degrees]);
}

export const light = [
  {
    name: "the deltoid has three-fold symmetry and no other",
    page: "round",
    async check(shown, { holds }) {
      await install(shown);
      await shown.scrub(9);
      await picture(shown, "deltoid");
      // Turning a picture of lines some pixels wide between its pixels blurs their edges: a percent may be lost (measured: less). A line that
      // is off by its own width would lose most.
      const measured = [];
      for (const degrees of [120, 240]) {
        const fits = await fit(shown, "deltoid", "deltoid", degrees);
        holds(fits > 0.98, `turned by ${degrees}°: ${fits}`);
        measured.push(`${degrees}°: ${fits.toFixed(3)}`);
      }
      for (const degrees of [40, 60, 90, 180]) {
        const fits = await fit(shown, "deltoid", "deltoid", degrees);
        holds(fits < 0.3, `turned by ${degrees}° it should not fit: ${fits}`);
        measured.push(`${degrees}°: ${fits.toFixed(3)}`);
      }
      // The next figure has four lobes: this test can tell.
      await shown.scrub(15);
      await picture(shown, "four");
      holds((await fit(shown, "four", "four", 120)) < 0.5, "3:−1 is not three-fold");
      holds((await fit(shown, "four", "four", 90)) > 0.95, "3:−1 is four-fold");
      holds((await fit(shown, "deltoid", "four")) < 0.5, "the two are not alike");
      return measured.join(", ");
    },
  },
  {
    name: "while it plays, a figure that stands looks as it does when it stands still",
    page: "round",
    async check(shown, { holds }) {
      await install(shown);
      await shown.scrub(9);
      const standing = await picture(shown, "still");
      await shown.scrub(7);
      await shown.page.click("#play");
      await shown.reaches(7.6, 11.5);
      const moving = await picture(shown, "playing");
      // Light fades with 0.08 s, the figure repeats every 1/75 s: what was passed last is brighter by a sixth, as light.
      const fits = await fit(shown, "still", "playing");
      holds(fits > 0.97, `playing against standing: ${fits}`);
      // As seen, by the cube root of that: a twentieth.
      holds(Math.abs(moving / standing - 1) < 0.1, `brightest ${moving}, standing ${standing}`);
      return fits.toFixed(3);
    },
  },
  {
    name: "the ends of a loop are one picture",
    page: "round",
    async check(shown, { holds }) {
      await install(shown);
      await shown.scrub(6);
      await picture(shown, "start");
      await shown.scrub(33.2);
      await picture(shown, "end");
      const fits = await fit(shown, "start", "end");
      holds(fits > 0.99, `${fits}`);
      return fits.toFixed(4);
    },
  },
  {
    name: "beam off is a faint grey line, a dimmed beam is dimmer",
    page: "round",
    async check(shown, { holds }) {
      await install(shown);
      const brightest = async (time) => {
        await shown.scrub(time);
        return picture(shown, "now");
      };
      const [full, half, dark] = [await brightest(9), await brightest(15), await brightest(20.2)];
      holds(half < full, `dimmed: ${half} of ${full}`);
      holds(dark < full / 2 && dark > 60, `dark: ${dark} of ${full}`);
    },
  },
  {
    name: "every moment has a picture without a hole or a number that is none",
    page: "once",
    async check(shown, { holds }) {
      await install(shown);
      for (const time of [0, 3, 6, 11, 12.9, 15, 20, 23, 26]) {
        await shown.scrub(time);
        holds((await picture(shown, "now")) > 60, `something stands on the wall at ${time} s`);
        for (const id of ["motor-a", "motor-b", "table-time", "doing"]) {
          const words = await shown.text(id);
          holds(!/NaN|Infinity|undefined/.test(words), `${id} at ${time} s: ${words}`);
        }
      }
    },
  },
];
