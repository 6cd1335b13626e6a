// What the eye collects: light adds up where the spot passes, and fades.
//
// Light is counted per length of line: 1 is a circle of the largest radius whose whole light falls on it evenly. What the
// eye makes of it goes with the cube root, as in the still pictures. While the show plays, light fades with FADE, counted
// in time of the show, so that a moment looks alike at every speed of playing and every rate of frames. A moment that
// stands still is the light of whole repeat periods around it, 1/50 s or more.

const FADE = 0.08;
// Fades after which nothing is left to see.
const GONE = 7;
const SHORTEST = 1 / 50;
// Looks at both mirrors in a turn of the faster one; cubic pieces between them are off by less than 10⁻⁵ of the reach.
const LOOKS = 96;
const MOST_LOOKS = 150000;
// How bright a line is that the beam would draw if it were on.
const GHOST_LIGHT = 0.07;
const WALL = [10, 13, 19];
const GHOST = [150, 158, 174];
const SHADES = 2048;
const BRIGHTEST = 4;

class Eye {
  constructor(canvas, scene, motion) {
    this.canvas = canvas;
    this.context = canvas.getContext("2d", { alpha: false });
    this.scene = scene;
    this.motion = motion;
    this.spot = spotOf(scene.optics);
    this.nodes = [0, 1, 2, 3].map(() => ({ x: 0, y: 0 }));
    const colour = scene.optics.colour.match(/[0-9a-f]{2}/g).map((pair) => parseInt(pair, 16));
    this.lit = shades(colour);
    this.unlit = shades(GHOST);
    this.fit();
  }

  // Takes the size that the page gives the canvas; says whether it changed.
  fit() {
    const wanted = this.canvas.clientWidth * Math.min(window.devicePixelRatio || 1, 2);
    const side = Math.round(Math.min(Math.max(wanted, 160), 1000));
    if (side === this.side) return false;
    this.side = this.canvas.width = this.canvas.height = side;
    this.light = new Float32Array(side * side);
    this.ghost = new Float32Array(side * side);
    this.ghostly = 0;
    this.image = this.context.createImageData(side, side);
    this.pixels = new Uint32Array(this.image.data.buffer);
    this.scale = (side * 0.47) / this.scene.optics.extent;
    // A line looks as wide as the beam, and never too thin to be seen.
    this.radius = Math.max(0.71 * this.scene.optics.beam_width * this.scale, side / 400, 1.4);
    // A line with density 1 shall have 1 in its middle, where the spots of a passing beam add up to radius·32/35.
    this.unit = (2 * Math.PI * this.scale * this.scene.optics.extent * 35) / (32 * this.radius);
    return true;
  }

  clear() {
    this.light.fill(0);
    this.ghost.fill(0);
    this.ghostly = 0;
  }

  // The picture of a moment that stands still.
  still(time) {
    this.clear();
    const index = this.motion.legAt(time);
    const period = this.motion.periodAt(index, time);
    const span = period * Math.max(1, Math.ceil(SHORTEST / period - 1e-9));
    this.collect(index, time - span / 2, time + span / 2, () => 1 / span);
    this.show();
  }

  // Goes on by a stretch of the show, which lies within a run of legs without a jump; what was there fades.
  pass(from, to) {
    this.fade(Math.exp(-(to - from) / FADE));
    const weight = (time) => Math.exp((time - to) / FADE) / FADE;
    let start = Math.max(from, to - GONE * FADE);
    let index = this.motion.legAt(start);
    while (start < to) {
      const leg = this.motion.legs[index];
      const last = index + 1 >= this.motion.legs.length;
      const end = last ? to : Math.min(to, leg.start_s + leg.length_s);
      if (end > start) this.collect(index, start, end, weight);
      start = Math.max(start, end);
      index += 1;
      if (last) break;
    }
  }

  fade(by) {
    const { light, ghost } = this;
    dim(light, by);
    this.ghostly *= by;
    if (this.ghostly < 1e-4) {
      if (this.ghostly > 0) ghost.fill(0);
      this.ghostly = 0;
      return;
    }
    dim(ghost, by);
  }

  // Adds the light of a stretch of one leg; `weight` is the share of it that a second of a moment gets.
  collect(index, from, to, weight) {
    const leg = this.motion.legs[index];
    const into = leg.beam > 0 ? this.light : this.ghost;
    const level = this.unit * (leg.beam > 0 ? leg.beam : GHOST_LIGHT);
    if (leg.beam === 0) this.ghostly = 1;
    const count = this.looks(index, from, to);
    const step = (to - from) / count;
    const nodes = this.nodes;
    for (let node = 0; node < 3; node += 1) this.look(index, from + (node - 1) * step, nodes[node]);
    for (let piece = 0; piece < count; piece += 1) {
      this.look(index, from + (piece + 2) * step, nodes[3]);
      const middle = from + (piece + 0.5) * step;
      this.draw(into, level * step * weight(middle));
      nodes.push(nodes.shift());
    }
  }

  looks(index, from, to) {
    let fastest = 0;
    for (let part = 0; part <= 4; part += 1) {
      const { a, b } = this.motion.at(index, from + ((to - from) * part) / 4);
      fastest = Math.max(fastest, Math.abs(a.speed), Math.abs(b.speed));
    }
    return Math.min(Math.max(Math.ceil((to - from) * fastest * LOOKS), 1), MOST_LOOKS);
  }

  look(index, time, out) {
    const { a, b } = this.motion.at(index, time);
    this.spot(a.phase, b.phase, out);
    const middle = this.side / 2;
    out.x = middle + out.x * this.scale;
    out.y = middle - out.y * this.scale;
  }

  // One piece between the two middle ones of four looks, as a cubic through all four, in steps of six tenths of a radius:
  // so far apart the sum of such spots ripples by less than a hundredth.
  draw(into, amount) {
    const [p, q, r, s] = this.nodes;
    const length = Math.hypot(r.x - q.x, r.y - q.y);
    const count = Math.max(Math.ceil(length / (this.radius * 0.6)), 1);
    for (let dot = 0; dot < count; dot += 1) {
      const u = (dot + 0.5) / count;
      const [v, w, z] = [u - 1, u - 2, u + 1];
      const [cp, cq, cr, cs] = [(-u * v * w) / 6, (z * v * w) / 2, (-z * u * w) / 2, (z * u * v) / 6];
      const x = cp * p.x + cq * q.x + cr * r.x + cs * s.x;
      const y = cp * p.y + cq * q.y + cr * r.y + cs * s.y;
      this.dab(into, x, y, amount / count);
    }
  }

  // The spot: (1 − (r/radius)²)³, whose cube root is what one sees of it.
  dab(into, x, y, amount) {
    const { side, radius } = this;
    const left = Math.max(Math.ceil(x - 0.5 - radius), 0);
    const right = Math.min(Math.floor(x - 0.5 + radius), side - 1);
    const top = Math.max(Math.ceil(y - 0.5 - radius), 0);
    const bottom = Math.min(Math.floor(y - 0.5 + radius), side - 1);
    const shrink = 1 / (radius * radius);
    for (let row = top; row <= bottom; row += 1) {
      const dy = row + 0.5 - y;
      const rest = 1 - dy * dy * shrink;
      for (let column = left, at = row * side + left; column <= right; column += 1, at += 1) {
        const dx = column + 0.5 - x;
        const inside = rest - dx * dx * shrink;
        if (inside > 0) into[at] += amount * inside * inside * inside;
      }
    }
  }

  // Puts what was collected on the canvas.
  show() {
    const { light, ghost, pixels, lit, unlit } = this;
    const steps = SHADES / BRIGHTEST;
    for (let at = 0; at < light.length; at += 1) {
      const here = light[at];
      pixels[at] = here === 0 ? lit[0] : lit[Math.min(Math.sqrt(here) * steps, SHADES - 1) | 0];
    }
    if (this.ghostly > 0) {
      for (let at = 0; at < ghost.length; at += 1) {
        const shade = Math.min(Math.sqrt(ghost[at]) * steps, SHADES - 1) | 0;
        if (ghost[at] > light[at] && shade > 0) pixels[at] = unlit[shade];
      }
    }
    this.context.putImageData(this.image, 0, 0);
  }
}

// What can no longer be seen is nothing: numbers that fade on and on become slow to compute with.
function dim(values, by) {
  for (let at = 0; at < values.length; at += 1) {
    const rest = values[at] * by;
    values[at] = rest > 1e-7 ? rest : 0;
  }
}

// Colours by the square root of the light, from the dark wall over the beam's colour to a paler one where the spot
// dwells; bytes in the order of image data on the little-endian machines that there are.
function shades(colour) {
  const table = new Uint32Array(SHADES);
  for (let shade = 0; shade < SHADES; shade += 1) {
    const root = (shade * BRIGHTEST) / SHADES;
    const seen = Math.cbrt(root * root);
    const paler = Math.min(Math.max((seen - 1.1) / 1.2, 0), 0.75);
    const [red, green, blue] = colour.map((part, channel) => {
      const full = part + (255 - part) * paler;
      return Math.round(WALL[channel] + (full - WALL[channel]) * Math.min(seen, 1));
    });
    table[shade] = ((255 << 24) | (blue << 16) | (green << 8) | red) >>> 0;
  }
  return table;
}
