// Buttons, keys and the slider.

const STEP = 1;
const LONG_STEP = 10;

// What a key does, where nothing else wants it. Keys that scroll a page or move within a list are taken only on the slider.
function keyAction(event, onSlider, player) {
  const step = event.shiftKey ? LONG_STEP : STEP;
  switch (event.key) {
    case " ":
      return () => event.repeat || player.toggle();
    case "ArrowLeft":
      return () => player.go(player.time - step);
    case "ArrowRight":
      return () => player.go(player.time + step);
    case "Home":
      return () => player.go(0);
    case "End":
      return () => player.go(player.scene.run_s);
    case "ArrowDown":
      return onSlider ? () => player.go(player.time - step) : null;
    case "ArrowUp":
      return onSlider ? () => player.go(player.time + step) : null;
    case "PageUp":
      return onSlider ? () => player.neighbour(-1) : null;
    case "PageDown":
      return onSlider ? () => player.neighbour(1) : null;
    default:
      return null;
  }
}

// Whether the focused control has a use of its own for a key.
function isWanted(event, slider) {
  const { target, key } = event;
  if (event.ctrlKey || event.altKey || event.metaKey) return true;
  if (target === slider || !(target instanceof Element)) return false;
  if (target.closest("select, input, textarea")) return true;
  return key === " " && target.closest("button, a, summary") !== null;
}

function listenToKeys(player, slider) {
  document.addEventListener("keydown", (event) => {
    if (event.defaultPrevented || isWanted(event, slider)) return;
    const action = keyAction(event, event.target === slider, player);
    if (!action) return;
    event.preventDefault();
    action();
  });
}

function fillRates(field, player) {
  for (const rate of RATES) {
    const words = { 0.25: "¼", 0.5: "½" }[rate] ?? String(rate);
    const input = element("input", undefined, { type: "radio", name: "rate", value: String(rate), checked: rate === 1 });
    input.addEventListener("change", () => {
      player.rate = rate;
    });
    const label = element("label");
    label.append(input, element("span", `${words}×`));
    field.append(label);
  }
}

// Where to choose a cue: a list while it is not too long to look through, else a number.
function fillChooser(label, scene, go) {
  const { cues } = scene;
  const choose = (number) => {
    const cue = cues.find((one) => one.cue === number);
    if (cue) go(cue.hold_start_s);
  };
  if (cues.length > 1000) {
    const input = element("input", undefined, { type: "number", min: "1", max: String(cues.length), id: "chooser" });
    input.addEventListener("change", () => choose(Number(input.value)));
    label.after(input);
    return { kind: "number", input };
  }
  const input = element("select", undefined, { id: "chooser" });
  for (const cue of cues) input.append(element("option", `${cue.cue} ${cueTitle(cue)}`, { value: String(cue.cue) }));
  input.addEventListener("change", () => choose(Number(input.value)));
  label.after(input);
  return { kind: "select", input };
}

function listenToLoop(box, words, player) {
  if (player.scene.loop_start_s === null) {
    box.parentElement.hidden = true;
    words.textContent = player.scene.left_out ? "" : "This show ends at rest.";
    return;
  }
  box.checked = true;
  box.addEventListener("change", () => {
    player.loops = box.checked;
    player.stale = true;
  });
}

// Dragging over the course is the slider's work; a click on it goes there too.
function listenToTime(page, player) {
  page.slider.max = String(player.scene.run_s);
  page.slider.addEventListener("input", () => player.go(Number(page.slider.value)));
  page.course.addEventListener("click", (event) => player.go(player.course.toTime(event.offsetX)));
  page.play.addEventListener("click", () => player.toggle());
  page.previous.addEventListener("click", () => player.neighbour(-1));
  page.next.addEventListener("click", () => player.neighbour(1));
}
