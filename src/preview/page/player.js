// Time: playing, standing, jumping; and everything that shows where the show is.

const RATES = [0.25, 0.5, 1, 2, 5, 10];
// A frame that comes later than this (a page in the background) goes on from where it was.
const LONGEST_FRAME = 0.5;
// Seconds between two pictures where the system asks for little motion: two a second.
const CALM_EVERY = 0.5;
// Seconds between two changes of the numbers while the show plays, and between two spoken cues.
const NUMBERS_EVERY = 0.4;
const SPEAK_EVERY = 3;

class Player {
  constructor(scene, page) {
    Object.assign(this, { scene, page, time: 0, rate: 1, playing: false, loops: scene.loop_start_s !== null });
    this.motion = new Motion(scene);
    this.eye = new Eye(page.wall, scene, this.motion);
    this.strip = new Strip(page.strip, scene, this.motion);
    this.course = new Course(page.course, scene, this.motion);
    this.calm = window.matchMedia("(prefers-reduced-motion: reduce)");
    this.numbersAt = this.spokenAt = this.calmAt = -Infinity;
    this.spoken = null;
    // Whether this round came out of the one before.
    this.wrapped = false;
    this.stale = true;
    this.table = new CueTable(page.table, scene, (time) => this.lookAt(time));
    this.frame = this.frame.bind(this);
    this.time = scene.show_start_s;
  }

  start() {
    this.course.draw();
    this.told();
    requestAnimationFrame(this.frame);
  }

  // One frame of the screen.
  frame(stamp) {
    const now = stamp / 1000;
    const passed = Math.min(Math.max(now - (this.last ?? now), 0), LONGEST_FRAME);
    this.last = now;
    // After a jump while it plays too: the wall must not go dark and light up again.
    if (this.stale) this.stand();
    if (this.playing) this.play(passed * this.rate, now);
    requestAnimationFrame(this.frame);
  }

  play(step, now) {
    const { run_s: end, loop_start_s: start } = this.scene;
    let from = this.time;
    let to = from + step;
    const stopped = to >= end && !this.loops;
    if (stopped) to = end;
    while (to >= end && this.loops) {
      if (!this.calm.matches) this.eye.pass(from, end);
      from = start;
      to = start + (to - end);
      this.wrapped = true;
    }
    if (!this.calm.matches && to > from) this.eye.pass(from, to);
    this.time = to;
    if (stopped) {
      this.pause();
      return;
    }
    this.drawPlaying(now);
  }

  drawPlaying(now) {
    if (this.calm.matches) {
      if (now - this.calmAt < CALM_EVERY) return;
      this.calmAt = now;
      this.eye.still(this.time);
    } else {
      this.eye.show();
    }
    this.strip.draw(this.time, this.loops, this.wrapped);
    this.page.slider.value = String(this.time);
    this.needle();
    if (now - this.numbersAt < NUMBERS_EVERY) return;
    this.numbersAt = now;
    this.told();
    this.speak(now);
  }

  // Draws the moment that stands still.
  stand() {
    this.stale = false;
    this.eye.still(this.time);
    this.strip.draw(this.time, this.loops, this.wrapped);
    this.page.slider.value = String(this.time);
    this.needle();
    this.told();
  }

  toggle() {
    if (this.playing) this.pause();
    else this.run();
  }

  run() {
    if (this.time >= this.scene.run_s) this.time = this.scene.loop_start_s ?? 0;
    this.playing = true;
    this.spoken = this.place().cue;
    this.numbersAt = -Infinity;
    this.page.play.textContent = "Pause";
  }

  pause() {
    this.playing = false;
    this.stale = true;
    this.page.play.textContent = "Play";
  }

  // Goes to a moment of table time, playing on if it plays.
  go(time) {
    this.time = Math.min(Math.max(time, 0), this.scene.run_s);
    this.stale = true;
    this.wrapped = false;
    this.numbersAt = this.calmAt = -Infinity;
    if (!this.playing) this.told();
  }

  // Goes to a moment from a place on the page that may be far from the wall.
  lookAt(time) {
    this.go(time);
    this.page.wall.scrollIntoView({ block: "nearest" });
  }

  // Goes to the next cue, or back to the start of this one or to the one before.
  neighbour(direction) {
    const { cues } = this.scene;
    const at = this.cuePlace();
    if (direction > 0) {
      const next = cues[Math.min(at + 1, cues.length - 1)];
      if (next) this.go(next.hold_start_s);
      return;
    }
    // Back to the start of this hold first, if it has been standing for more than a second.
    const here = cues[at];
    const back = here && this.time > here.hold_start_s + 1 ? here : cues[at - 1];
    this.go(back ? back.hold_start_s : 0);
  }

  // The number in the list of the last cue whose hold has begun; −1 before the first.
  cuePlace() {
    const { cues } = this.scene;
    const at = lastNotAbove(cues, this.time, (cue) => cue.hold_start_s);
    return cues.length > 0 && cues[at].hold_start_s <= this.time + 1e-9 ? at : -1;
  }

  // The leg of this moment, its cue, and what happens in words.
  place() {
    const index = this.motion.legAt(this.time);
    const leg = this.scene.legs[index];
    const cue = this.motion.cueOf(index);
    const share = plain((100 * (this.time - leg.start_s)) / leg.length_s, 0);
    const resting = this.time >= this.scene.run_s && this.scene.loop_start_s === null;
    const doing = {
      "run-up": `runs up, ${share} %`,
      morph: `changes into it, ${share} %`,
      hold: "stands",
      loop: `changes back into cue ${cue?.cue ?? 1}, ${share} %`,
      "run-down": resting ? "at rest" : `runs down, ${share} %`,
    }[leg.kind];
    return { leg, cue, doing };
  }

  told() {
    const { leg, cue, doing } = this.place();
    const motors = this.motion.motorsAt(this.time);
    const { page, scene, time } = this;
    const set = (name, words) => {
      if (page.told[name].textContent !== words) page.told[name].textContent = words;
    };
    set("table-time", clock(time));
    set("show-time", clock(time - scene.show_start_s));
    set("cue", cue ? `${leg.kind === "loop" ? leg.cue : cue.cue} ${cueTitle(cue)}` : "none");
    set("doing", doing);
    set("figure", cue?.figure ?? "none");
    set("way", cue?.way ?? "none");
    set("ratio", cue ? ratioText(cue) : "none");
    for (const name of ["a", "b"]) {
      set(`motor-${name}`, `${rpm(motors[name].speed)}, ${plain(motors[name].use * 100, 0)} % acc.`);
    }
    set("beam", leg.beam > 0 ? `${plain(leg.beam * 100, 0)} %` : "off: the grey line is where it would be");
    const at = leg.kind === "morph" ? lastNotAbove(scene.cues, leg.cue, (one) => one.cue) : this.cuePlace();
    this.table.mark(at, this.playing);
    if (!this.playing || cue !== this.valued) this.value(cue, doing);
  }

  // What the slider says of itself: while the show plays it changes with the cue, not with every frame.
  value(cue, doing) {
    this.valued = cue;
    const what = cue ? `cue ${cue.cue}, ${cueTitle(cue)}, ${doing}` : doing;
    this.page.slider.setAttribute("aria-valuetext", `${clock(this.time)}, ${what}`);
    this.page.wall.setAttribute("aria-label", `The wall: ${what}`);
    if (this.page.chooser.kind === "select" && cue) this.page.chooser.input.value = String(cue.cue);
  }

  speak(now) {
    const { cue } = this.place();
    if (cue === this.spoken || now - this.spokenAt < SPEAK_EVERY) return;
    this.spoken = cue;
    this.spokenAt = now;
    this.page.said.textContent = cue ? `cue ${cue.cue}, ${cueTitle(cue)}` : "run-down";
  }

  needle() {
    this.page.needle.style.left = `${this.course.toX(this.time)}px`;
  }

  // After a change of size or of colours.
  resized() {
    const changed = this.course.fit();
    this.strip.fit();
    this.eye.fit();
    this.stale = true;
    this.course.draw();
    return changed;
  }

  recoloured() {
    this.strip.inks = this.course.inks = readInks();
    this.stale = true;
    this.course.draw();
  }
}
