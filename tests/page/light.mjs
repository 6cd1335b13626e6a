// The page's eye without a page: node light.mjs SCENE.json
//
// What the eye holds after a stretch is known: all light that came in, faded by its age. A stretch of s seconds of a full
// beam leaves 1 − exp(−s/FADE) of the steady light; a steady light is 1, spread over spots of area π·radius²/4 (the integral
// of (1 − r²/R²)³ over a disc).

import { readFileSync } from "node:fs";
import { runInNewContext } from "node:vm";

const page = new URL("../../src/preview/page/", import.meta.url);
const text = ["motion.js", "optics.js", "eye.js"].map((name) => readFileSync(new URL(name, page), "utf8")).join("\n");
const { Motion, Eye, FADE } = runInNewContext(`${text}\n({ Motion, Eye, FADE })`, { window: { devicePixelRatio: 1 } });

const scene = JSON.parse(readFileSync(process.argv[2], "utf8"));
const canvas = {
  clientWidth: 300,
  getContext: () => ({
    createImageData: (width, height) => ({ data: new Uint8ClampedArray(width * height * 4) }),
    putImageData: () => {},
  }),
};

// What is in the eye after playing a stretch at a rate of frames.
function played(from, to, rate) {
  const eye = new Eye(canvas, scene, new Motion(scene));
  const frames = Math.round((to - from) * rate);
  for (let frame = 0; frame < frames; frame += 1) {
    eye.pass(from + ((to - from) * frame) / frames, from + ((to - from) * (frame + 1)) / frames);
  }
  return eye;
}

const sum = (values) => values.reduce((total, value) => total + value, 0);

function spread(eye) {
  return (eye.unit * Math.PI * eye.radius ** 2) / 4;
}

function check(got, want, tolerance, what) {
  if (!(Math.abs(got / want - 1) <= tolerance)) throw new Error(`${what}: ${got}, not ${want}`);
}

const hold = scene.legs.findIndex((leg) => leg.kind === "hold");
const morph = scene.legs.findIndex((leg) => leg.kind === "morph");
const seconds = 0.5;
const share = 1 - Math.exp(-seconds / FADE);
for (const [what, from] of [
  ["a figure that stands", scene.legs[hold].start_s + 1],
  ["a transition", scene.legs[morph].start_s + 2],
  ["over a boundary", scene.legs[morph].start_s - 0.2],
]) {
  const pictures = [15, 60, 144].map((rate) => played(from, from + seconds, rate));
  for (const eye of pictures) {
    // A spot's share of a pixel grid is within a percent of its area, and evens out over thousands of spots; a piece of the
    // way (1/96 turn) fades as one.
    check(sum(eye.light) / spread(eye), share, 0.003, `${what}: the light in all`);
  }
  const [slow, usual, fast] = pictures.map((eye) => eye.light);
  const difference = (one, two) => sum(one.map((value, at) => Math.abs(value - two[at]))) / sum(one);
  for (const [one, two] of [[slow, usual], [fast, usual]]) {
    // Spots lie elsewhere on the same line, half a radius apart: their sum ripples by little.
    const off = difference(one, two);
    if (!(off < 0.01)) throw new Error(`${what}: pictures differ by ${off} of their light`);
  }
}

// A standing moment has all the light of a full beam, once.
const eye = new Eye(canvas, scene, new Motion(scene));
eye.still(scene.legs[hold].start_s + 1);
check(sum(eye.light) / spread(eye), 1, 0.003, "a standing moment");
console.log("light is kept");
