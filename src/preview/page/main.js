// Puts the page together.

function find(id) {
  return document.getElementById(id);
}

function open() {
  const scene = JSON.parse(find("scene").textContent);
  const told = Object.fromEntries(
    ["table-time", "show-time", "cue", "doing", "figure", "ratio", "way", "motor-a", "motor-b", "beam"].map((id) => [id, find(id)]),
  );
  const page = {
    wall: find("wall"), strip: find("strip"), course: find("course"), slider: find("slider"), needle: find("needle"),
    play: find("play"), previous: find("previous"), next: find("next"), said: find("said"), told,
    table: { body: find("cues"), before: find("cues-before"), after: find("cues-after"), label: find("cues-shown") },
  };
  page.chooser = fillChooser(find("chooser-label"), scene, (time) => player.go(time));
  const player = new Player(scene, page);
  fillRates(find("rates"), player);
  listenToLoop(find("loops"), find("ending"), player);
  listenToTime(page, player);
  listenToKeys(player, page.slider);
  const go = (time) => player.go(time);
  listFindings(find("findings"), scene, player.course, (time) => player.lookAt(time));
  const tell = (words) => {
    find("mark-words").textContent = words;
  };
  const mark = () => placeMarks(find("marks"), player.course, scene.findings, { go, tell });
  mark();
  new ResizeObserver(() => player.resized() && mark()).observe(document.body);
  window.matchMedia("(prefers-color-scheme: dark)").addEventListener("change", () => player.recoloured());
  player.start();
}

open();
