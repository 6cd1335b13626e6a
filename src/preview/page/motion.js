// What both mirrors do at a moment, from the moves of the scene.
//
// Turns, turns/s and seconds, counter-clockwise as seen on the wall. The formulas are those of the program's own pictures.

// s, ∫s and s′ of a law at u from 0 to 1, into `out`.
function lawAt(law, u, out) {
  if (law.kind === "scurve") return scurveAt(Math.max(law.share, 1e-12), u, out);
  const { s, area } = law;
  const pieces = s.length - 1;
  const scaled = Math.min(Math.max(u, 0), 1) * pieces;
  const index = Math.min(Math.floor(scaled), pieces - 1);
  const w = scaled - index;
  const width = 1 / pieces;
  // Hermite for the area from its values and slopes; its derivative is s, its second derivative s′.
  const gain = area[index + 1] - area[index];
  const c2 = 3 * gain - width * (2 * s[index] + s[index + 1]);
  const c3 = width * (s[index] + s[index + 1]) - 2 * gain;
  out.area = area[index] + w * (width * s[index] + w * (c2 + w * c3));
  out.s = s[index] + (w * (2 * c2 + 3 * w * c3)) / width;
  out.slope = (2 * c2 + 6 * w * c3) / (width * width);
}

// Acceleration rises over the share r of the time, stays, falls over it.
function scurveAt(r, u, out) {
  const top = 1 / (1 - r);
  if (u > 0.5) {
    scurveAt(r, 1 - u, out);
    out.area += u - 0.5;
    out.s = 1 - out.s;
    return;
  }
  if (u < r) {
    out.s = (top * u * u) / (2 * r);
    out.area = (out.s * u) / 3;
    out.slope = (top * u) / r;
    return;
  }
  const past = u - r;
  out.s = top * (r / 2 + past);
  out.area = top * ((r * r) / 6 + (r * past) / 2 + (past * past) / 2);
  out.slope = top;
}

// Phase, speed and acceleration of one mirror t seconds into a leg, into `out`. Before its start and after its end a leg
// goes on at the speed it has there.
function mirrorAt(move, law, length, t, out) {
  const { start, from, change = 0, correction = 0 } = move;
  const u = t / length;
  if (u < 0) return freely(out, start + from * t, from);
  const shape = mirrorAt.shape;
  if (u > 1) {
    shape.area = 0;
    if (law) lawAt(law, 1, shape);
    const end = start + (from + change * shape.area) * length + correction;
    return freely(out, end + (from + change) * (t - length), from + change);
  }
  shape.s = shape.area = shape.slope = 0;
  if (law) lawAt(law, u, shape);
  const v = 1 - u;
  const uu = u * u;
  const bump = 140 * uu * u * v * v * v;
  const bumpArea = uu * uu * (35 + u * (-84 + u * (70 - 20 * u)));
  const bumpSlope = 420 * uu * v * v * (1 - 2 * u);
  out.phase = start + from * t + change * length * shape.area + correction * bumpArea;
  out.speed = from + change * shape.s + (correction / length) * bump;
  out.acceleration = (change / length) * shape.slope + (correction / (length * length)) * bumpSlope;
}
mirrorAt.shape = { s: 0, area: 0, slope: 0 };

function freely(out, phase, speed) {
  out.phase = phase;
  out.speed = speed;
  out.acceleration = 0;
}

// The number of the last entry of a rising list that is not above `value`; 0 where all are.
function lastNotAbove(list, value, key) {
  let low = 0;
  let high = list.length;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (key(list[middle]) <= value) low = middle;
    else high = middle;
  }
  return low;
}

// The whole show.
class Motion {
  constructor(scene) {
    this.legs = scene.legs;
    this.laws = scene.laws;
    this.rotors = scene.rotors;
    this.cues = scene.cues;
    this.loopStart = scene.loop_start_s;
    this.state = { a: { phase: 0, speed: 0, acceleration: 0 }, b: { phase: 0, speed: 0, acceleration: 0 } };
  }

  // The number of the leg at a moment of table time; a moment between two belongs to what starts there.
  legAt(time) {
    return lastNotAbove(this.legs, time, (leg) => leg.start_s);
  }

  // Both mirrors at a moment, by leg number; the same object is filled each time.
  at(index, time) {
    const leg = this.legs[index];
    for (const name of ["a", "b"]) {
      const move = leg[name];
      mirrorAt(move, this.laws[move.law], leg.length_s, time - leg.start_s, this.state[name]);
    }
    return this.state;
  }

  // Both motors at a moment: rpm, and the share of the acceleration's limit that is used.
  motorsAt(time) {
    const state = this.at(this.legAt(time), time);
    const motor = (name) => {
      const rotor = this.rotors[name];
      const speed = state[name].speed * rotor.motor_per_mirror * 60;
      const acceleration = state[name].acceleration * rotor.motor_per_mirror * 60;
      const slowing = acceleration * speed < 0;
      const limit = slowing ? rotor.deceleration_rpm_s : rotor.acceleration_rpm_s;
      return { speed, use: Math.abs(acceleration) / limit };
    };
    return { a: motor("a"), b: motor("b") };
  }

  // The cue that a leg belongs to or leads to; null for a run-down.
  cueOf(index) {
    const leg = this.legs[index];
    if (leg.kind === "run-down") return null;
    if (leg.kind === "run-up" || leg.kind === "loop") return this.cues[0] ?? null;
    const at = lastNotAbove(this.cues, leg.cue, (cue) => cue.cue);
    return this.cues[at] ?? null;
  }

  // The time in which the picture at a moment is drawn once: the figure's repeat, in a transition evenly by ratio from
  // that of the figure before to that of the figure after; nowhere more than 1500 turns of the faster mirror.
  periodAt(index, time) {
    const leg = this.legs[index];
    if (leg.kind === "hold") return this.periodOfHold(index);
    const before = this.periodOfHold(index - 1);
    const after = this.periodOfHold(leg.kind === "loop" ? this.legAt(this.loopStart) : index + 1);
    const u = Math.min(Math.max((time - leg.start_s) / leg.length_s, 0), 1);
    const from = before ?? after ?? 1 / 50;
    const to = after ?? before ?? 1 / 50;
    return from * (to / from) ** u;
  }

  periodOfHold(index) {
    const leg = this.legs[index];
    if (leg?.kind !== "hold") return null;
    const faster = Math.max(Math.abs(leg.a.from), Math.abs(leg.b.from), 1e-9);
    const repeat = this.cueOf(index)?.repeat_hz ?? 0;
    return Math.min(repeat > 0 ? 1 / repeat : 1 / 50, 1500 / faster);
  }
}
