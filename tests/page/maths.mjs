// Compares the page's motion.js and optics.js with values of the program: node maths.mjs CASES.json
//
// Both compute the same formulas in the same order in 64-bit floats, from the same digits. They differ where the program
// has a start time or a length as a longer fraction, and in the last digit of sine and cosine. A phase of some ten thousand
// turns has steps of 2·10⁻¹², the acceleration is divided by the square of a sample's width (1/256), so:
const TOLERANCE = { phase: 1e-9, speed: 1e-9, acceleration: 1e-6 };
// A spot moves by at most 2π reaches a turn; a trace multiplies that by a little. Relative to the largest radius.
const SPOT = 1e-8;

import { readFileSync } from "node:fs";
import { runInNewContext } from "node:vm";

const page = new URL("../../src/preview/page/", import.meta.url);
const text = ["motion.js", "optics.js"].map((name) => readFileSync(new URL(name, page), "utf8")).join("\n");
const { Motion, spotOf } = runInNewContext(`${text}\n({ Motion, spotOf })`, { Math });

let count = 0;
const wrong = [];
function compare(got, want, tolerance, what) {
  if (!(Math.abs(got - want) <= tolerance)) wrong.push(`${what}: ${got}, not ${want}`);
}

for (const { show, scene, probes } of JSON.parse(readFileSync(process.argv[2], "utf8"))) {
  const motion = new Motion(scene);
  const spot = spotOf(scene.optics);
  const out = { x: NaN, y: NaN };
  for (const { leg, t, a, b, spot: want } of probes) {
    // The moment is told as the page has it: in table time.
    const state = motion.at(leg, scene.legs[leg].start_s + t);
    const what = `${show} leg ${leg} at ${t} s`;
    for (const [name, values] of [["a", a], ["b", b]]) {
      // Table time has fewer digits than time in the leg: 300 s have steps of 6·10⁻¹⁴ s, at 300 turns/s 2·10⁻¹¹ turns.
      compare(state[name].phase, values[0], TOLERANCE.phase, `${what} phase ${name}`);
      compare(state[name].speed, values[1], TOLERANCE.speed, `${what} speed ${name}`);
      compare(state[name].acceleration, values[2], TOLERANCE.acceleration, `${what} acceleration ${name}`);
    }
    spot(state.a.phase, state.b.phase, out);
    compare(out.x, want[0], SPOT * scene.optics.extent, `${what} x`);
    compare(out.y, want[1], SPOT * scene.optics.extent, `${what} y`);
    count += 1;
  }
}

if (wrong.length > 0) {
  console.log(wrong.slice(0, 20).join("\n"));
  console.log(`${wrong.length} values differ`);
  process.exit(1);
}
console.log(`${count} instants agree`);
