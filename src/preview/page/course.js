// The course of the whole show above the time slider: cues, both motors' speeds, and a mark for each finding.

// The slider's thumb is this wide; its middle runs from half of it to half of it before the end.
const THUMB = 18;
// Marks that would stand closer than this are one.
const MARK = 84;

class Course extends Graph {
  constructor(canvas, scene, motion) {
    super(canvas);
    this.scene = scene;
    this.motion = motion;
  }

  toX(time) {
    return THUMB / 2 + (time / this.scene.run_s) * (this.width - THUMB);
  }

  toTime(x) {
    const share = (x - THUMB / 2) / (this.width - THUMB);
    return Math.min(Math.max(share, 0), 1) * this.scene.run_s;
  }

  draw() {
    this.wipe();
    const cues = { top: 2, bottom: 28 };
    const curves = { top: 36, bottom: this.height - 4 };
    this.cues(cues);
    this.curves(curves);
    const start = this.toX(this.scene.loop_start_s ?? this.scene.show_start_s);
    this.line(start, 0, start, this.height, this.inks.soft, 1, [2, 3]);
  }

  // A block for each hold; between them the light of a transition, or a gap where it is dark.
  cues({ top, bottom }) {
    const { inks } = this;
    let free = -Infinity;
    for (const leg of this.scene.legs) {
      const x = this.toX(leg.start_s);
      const end = this.toX(leg.start_s + leg.length_s);
      if (end - x < 0.4 && end < free) continue;
      if (leg.kind !== "hold") {
        if (leg.beam > 0) this.area(x, top + 9, end - x, 8, inks.morph);
        else this.line(x, top + 13, end, top + 13, inks.soft, 1, [2, 3]);
        continue;
      }
      this.area(x, top, Math.max(end - x - 1, 1), bottom - top, inks.band);
      const words = String(leg.cue);
      const wide = 9 + 7 * words.length;
      if (end - x > wide && x > free) {
        this.text(words, x + 5, top + 17, inks.text, { bold: true });
        free = x + wide;
      }
    }
  }

  curves({ top, bottom }) {
    const { inks, scene } = this;
    const count = Math.max(Math.round((this.width - THUMB) / 1.5), 2);
    const times = Array.from({ length: count + 1 }, (_, at) => (scene.run_s * at) / count);
    const xs = times.map((time) => this.toX(time));
    const states = times.map((time) => this.motion.motorsAt(time));
    const largest = Math.max(scene.rotors.a.top_rpm, scene.rotors.b.top_rpm);
    const toY = (speed) => bottom - (Math.abs(speed) / largest) * (bottom - top);
    this.line(xs[0], bottom, xs[count], bottom, inks.hair);
    this.line(xs[0], top, xs[count], top, inks.hair, 1, [2, 3]);
    this.curve(xs, states.map((state) => state.a.speed), toY, inks["motor-a"]);
    this.curve(xs, states.map((state) => state.b.speed), toY, inks["motor-b"], [5, 3]);
  }

  // The findings that have a time, as groups that do not overlap: { x, time, entries }.
  groups(findings) {
    const entries = [];
    for (const finding of findings) {
      for (const index of finding.legs) entries.push({ finding, index, time: this.momentOf(index) });
    }
    entries.sort((one, two) => one.time - two.time || RANK[one.finding.severity] - RANK[two.finding.severity]);
    const groups = [];
    for (const entry of entries) {
      const x = Math.min(Math.max(this.toX(entry.time), MARK / 2), this.width - MARK / 2);
      const last = groups[groups.length - 1];
      if (last && x - last.x < MARK) last.entries.push(entry);
      else groups.push({ x, time: entry.time, entries: [entry] });
    }
    return groups;
  }

  // Where to look at a finding of a leg: a hold as it begins, a transition in its middle.
  momentOf(index) {
    const leg = this.scene.legs[index];
    return leg.kind === "hold" ? leg.start_s : leg.start_s + leg.length_s / 2;
  }
}

// Fills the row of marks; `go` leads to a moment.
function placeMarks(row, course, findings, { go, tell }) {
  row.replaceChildren();
  for (const group of course.groups(findings)) {
    const worst = group.entries.reduce((one, two) => (RANK[two.finding.severity] < RANK[one.finding.severity] ? two : one));
    const { severity } = worst.finding;
    const more = group.entries.length - 1;
    const mark = element("button", more > 0 ? `${severity} +${more}` : severity, { type: "button", className: `mark ${severity}` });
    mark.style.left = `${group.x}px`;
    const words = markWords(group, worst, course.scene);
    mark.setAttribute("aria-label", words);
    mark.addEventListener("click", () => go(worst.time));
    for (const event of ["mouseenter", "focus", "click"]) mark.addEventListener(event, () => tell(words));
    row.append(mark);
  }
}

function markWords({ entries }, worst, scene) {
  const { finding, time, index } = worst;
  const leg = scene.legs[index];
  const where = leg.kind === "hold" || leg.kind === "morph" ? `cue ${leg.cue}, ${leg.kind}` : leg.kind;
  const more = entries.length > 1 ? ` And ${entries.length - 1} more near it, in the list of findings.` : "";
  return `${finding.severity} at ${clock(time)}, ${where}: ${finding.message}.${more}`;
}
