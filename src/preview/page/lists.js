// Findings and cues as lists that can be read without the pictures.

// Rows of the table of cues at a time.
const ROWS = 200;
const MOST_FINDINGS = 300;

// Fills the list of findings; each that has a time leads there.
function listFindings(list, scene, course, go) {
  const shown = scene.findings.slice(0, MOST_FINDINGS);
  for (const finding of shown) {
    const item = element("li", undefined, { className: finding.severity });
    const head = element("p");
    head.append(element("strong", finding.severity), " ", element("code", finding.code));
    if (finding.count > 1) head.append(` ${finding.count} times`);
    item.append(head, quoting(`${finding.message}.`));
    if (finding.help) item.append(quoting(finding.help));
    const foot = element("p", undefined, { className: "where" });
    foot.append(element("bdi", finding.file), ` line ${finding.line}`);
    for (const index of finding.legs.slice(0, 3)) foot.append(" ", goButton(scene, course, index, finding, go));
    item.append(foot);
    list.append(item);
  }
  if (shown.length < scene.findings.length) {
    list.append(element("li", `${scene.findings.length - shown.length} more are not listed here.`));
  }
}

// A paragraph in which what stands between backticks is code.
function quoting(words) {
  const made = element("p");
  made.append(...words.split("`").map((part, at) => (at % 2 === 1 ? element("code", part) : part)));
  return made;
}

function goButton(scene, course, index, finding, go) {
  const leg = scene.legs[index];
  const time = course.momentOf(index);
  const button = element("button", `look at ${clock(time)}`, { type: "button", className: "small" });
  button.setAttribute("aria-label", `look at ${clock(time)}, cue ${leg.cue}, ${finding.code}`);
  button.addEventListener("click", () => go(time));
  return button;
}

// The table of cues, some hundred rows at a time; the current one is marked.
class CueTable {
  constructor({ body, before, after, label }, scene, go) {
    Object.assign(this, { body, before, after, label, scene, go, first: -1, current: -1 });
    before.addEventListener("click", () => this.fill(this.first - ROWS));
    after.addEventListener("click", () => this.fill(this.first + ROWS));
    this.fill(0);
  }

  fill(first) {
    const { cues } = this.scene;
    this.first = first;
    this.body.replaceChildren(...cues.slice(first, first + ROWS).map((cue) => this.row(cue)));
    const paged = cues.length > ROWS;
    this.before.hidden = this.after.hidden = this.label.hidden = !paged;
    this.before.disabled = first === 0;
    this.after.disabled = first + ROWS >= cues.length;
    if (paged) {
      const last = cues[Math.min(first + ROWS, cues.length) - 1];
      this.label.textContent = `cues ${cues[first].cue} to ${last.cue} of ${cues[cues.length - 1].cue}`;
    }
    this.paint();
  }

  row(cue) {
    const row = element("tr");
    const button = element("button", String(cue.cue), { type: "button", className: "small" });
    button.setAttribute("aria-label", `go to cue ${cue.cue}, ${cueTitle(cue)}`);
    button.addEventListener("click", () => this.go(cue.hold_start_s));
    const number = element("th", undefined, { scope: "row" });
    number.append(button);
    row.append(number);
    for (const words of [
      cue.name ?? "",
      cue.figure,
      ratioText(cue),
      clock(cue.start_s),
      cue.way ?? "none",
      duration(cue.end_s - cue.hold_start_s),
      `${plain(cue.repeat_hz, 2)} Hz`,
    ]) {
      const cell = element("td");
      cell.append(element("bdi", words));
      row.append(cell);
    }
    return row;
  }

  // Marks the cue with this place in the list; −1 for none. While the show plays, the table follows.
  mark(place, follow) {
    if (place === this.current) return;
    this.current = place;
    const page = Math.floor(Math.max(place, 0) / ROWS) * ROWS;
    if (follow && page !== this.first) this.fill(page);
    else this.paint();
  }

  paint() {
    this.body.querySelector("[aria-current]")?.removeAttribute("aria-current");
    this.body.rows[this.current - this.first]?.setAttribute("aria-current", "true");
  }
}
