// The motors around this moment: speeds with their limits, use of the acceleration's limit, the beam.

const BEFORE = 4;
const AFTER = 8;
// A hair over a limit is not drawn as past it: the numbers of the scene are rounded.
const HAIR = 1 + 1e-6;

class Strip extends Graph {
  constructor(canvas, scene, motion) {
    super(canvas);
    this.motion = motion;
    this.scene = scene;
    const { a, b } = scene.rotors;
    this.top = Math.max(a.top_rpm, b.top_rpm);
    const backward = scene.legs.some((leg) => this.runsBackward(leg));
    this.bottom = backward ? -this.top : 0;
  }

  runsBackward(leg) {
    return ["a", "b"].some((name) => {
      const { from, change = 0 } = leg[name];
      const motor = this.scene.rotors[name].motor_per_mirror;
      return Math.min(from * motor, (from + change) * motor) < -1e-6;
    });
  }

  // From moments of the page's clock to moments of the table: what comes after a loop's end is its start again, and before
  // the start of a later round was the end of the one before.
  tableTime(time, loops, wrapped) {
    const { run_s: end, loop_start_s: start } = this.scene;
    if (wrapped && time < start) return Math.max(end - (start - time), start);
    if (time <= end || !loops) return time;
    return start + ((time - end) % (end - start));
  }

  draw(now, loops, wrapped) {
    this.wipe();
    const left = 58;
    const right = this.width - 10;
    const toX = (time) => left + ((time - now + BEFORE) / (BEFORE + AFTER)) * (right - left);
    const xs = [];
    const samples = [];
    const first = wrapped ? now - BEFORE : Math.max(now - BEFORE, 0);
    const last = loops ? now + AFTER : Math.min(now + AFTER, this.scene.run_s);
    const count = Math.max(Math.round((toX(last) - toX(first)) / 2), 1);
    for (let at = 0; at <= count; at += 1) {
      const time = first + ((last - first) * at) / count;
      const inTable = this.tableTime(time, loops, wrapped);
      xs.push(toX(time));
      samples.push({ ...this.motion.motorsAt(inTable), beam: this.beamAt(inTable), time });
    }
    const heights = this.lanes();
    this.speeds(xs, samples, left, right, heights.speeds);
    this.uses(xs, samples, left, right, heights.uses);
    this.beams(xs, samples, left, heights.beam);
    this.times(now, toX, left, right, heights.foot);
    this.line(toX(now), 4, toX(now), heights.foot.top, this.inks.text, 2);
  }

  lanes() {
    const foot = this.height - 18;
    const beam = { top: foot - 22, bottom: foot - 6 };
    const uses = { top: beam.top - 64, bottom: beam.top - 12 };
    return { speeds: { top: 10, bottom: uses.top - 16 }, uses, beam, foot: { top: foot } };
  }

  beamAt(time) {
    return this.motion.legs[this.motion.legAt(time)].beam;
  }

  speeds(xs, samples, left, right, { top, bottom }) {
    const { inks } = this;
    const span = (this.top - this.bottom) * 1.08;
    const toY = (value) => bottom - ((value - this.bottom * 1.04) / span) * (bottom - top);
    for (const [name, ink, dash] of [["a", inks["motor-a"], []], ["b", inks["motor-b"], [7, 4]]]) {
      const rotor = this.scene.rotors[name];
      const stall = Math.abs(rotor.stall_rpm);
      if (stall > 0) this.area(left, toY(stall), right - left, Math.max(toY(-Math.min(stall, -this.bottom)) - toY(stall), 1), inks.band);
      for (const limit of this.bottom < 0 ? [rotor.top_rpm, -rotor.top_rpm] : [rotor.top_rpm]) {
        this.line(left, toY(limit), right, toY(limit), ink, 1, [2, 3]);
      }
      const values = samples.map((sample) => sample[name].speed);
      this.curve(xs, values, toY, ink, dash);
      this.past(xs, values, toY, rotor.top_rpm * HAIR);
    }
    this.line(left, toY(0), right, toY(0), inks.hair);
    for (const value of this.bottom < 0 ? [this.top, 0, -this.top] : [this.top, 0]) {
      this.text(plain(value, 0), left - 6, toY(value) + 4, inks.soft, { align: "right" });
    }
    this.text("rpm", left - 6, toY(this.top) + 18, inks.soft, { align: "right" });
  }

  uses(xs, samples, left, right, { top, bottom }) {
    const { inks } = this;
    const most = Math.max(1.25, ...samples.map((sample) => Math.min(Math.max(sample.a.use, sample.b.use), 4)));
    const toY = (value) => bottom - (Math.min(value, most) / most) * (bottom - top);
    this.line(left, toY(1), right, toY(1), inks.text, 1, [2, 3]);
    this.line(left, bottom, right, bottom, inks.hair);
    for (const [name, ink, dash] of [["a", inks["motor-a"], []], ["b", inks["motor-b"], [7, 4]]]) {
      const values = samples.map((sample) => sample[name].use);
      this.curve(xs, values, toY, ink, dash);
      this.past(xs, values, toY, HAIR);
    }
    this.text("100 %", left - 6, toY(1) + 4, inks.soft, { align: "right" });
    this.text("acc.", left - 6, bottom, inks.soft, { align: "right" });
  }

  beams(xs, samples, left, { top, bottom }) {
    const { inks } = this;
    this.text("beam", left - 6, bottom - 2, inks.soft, { align: "right" });
    this.line(left, bottom, xs[xs.length - 1], bottom, inks.hair);
    const width = xs.length > 1 ? xs[1] - xs[0] : 1;
    samples.forEach((sample, at) => {
      const height = sample.beam * (bottom - top);
      if (height > 0 && at + 1 < xs.length) this.area(xs[at], bottom - height, width + 0.5, height, inks.light);
    });
  }

  times(now, toX, left, right, { top }) {
    for (let offset = -BEFORE; offset <= AFTER; offset += 2) {
      const x = toX(now + offset);
      const words = offset === 0 ? "now" : `${offset > 0 ? "+" : "−"}${Math.abs(offset)} s`;
      const align = offset === -BEFORE ? "left" : offset === AFTER ? "right" : "center";
      this.text(words, x, top + 14, this.inks.soft, { align, bold: offset === 0 });
    }
  }
}
