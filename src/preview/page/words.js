// Times, numbers and severities in words.

// `0:04:21.3`: hours, minutes, seconds and tenths.
function clock(seconds) {
  const tenths = Math.round(Math.abs(seconds) * 10);
  const two = (value) => String(value).padStart(2, "0");
  const whole = Math.floor(tenths / 10);
  const sign = seconds < 0 && tenths > 0 ? "−" : "";
  const hours = Math.floor(whole / 3600);
  return `${sign}${hours}:${two(Math.floor(whole / 60) % 60)}:${two(whole % 60)}.${tenths % 10}`;
}

// `4 s`, `1 min 30 s`, `8 h`; at most three decimals.
function duration(seconds) {
  const whole = Math.round(seconds * 1000) / 1000;
  const hours = Math.floor(whole / 3600);
  const minutes = Math.floor(whole / 60) % 60;
  const rest = Math.round((whole - hours * 3600 - minutes * 60) * 1000) / 1000;
  const parts = [];
  if (hours > 0) parts.push(`${hours} h`);
  if (minutes > 0) parts.push(`${minutes} min`);
  if (rest > 0 || parts.length === 0) parts.push(`${rest} s`);
  return parts.join(" ");
}

// A number for reading: at most `places` decimals, none needlessly, a true minus.
function plain(value, places) {
  const scale = 10 ** places;
  const rounded = Math.round(value * scale) / scale;
  return (rounded === 0 ? "0" : String(rounded)).replace("-", "−");
}

function rpm(value) {
  return `${plain(value, 0)} rpm`;
}

function ratioText(cue) {
  return `${cue.ratio[0]}:${cue.ratio[1]}`.replace(/-/g, "−");
}

// What a cue is called: its name, else its figure.
function cueTitle(cue) {
  return cue.name ?? cue.figure;
}

const RANK = { error: 0, warning: 1, note: 2 };

function counted(count, word) {
  return count === 1 ? `1 ${word}` : `${count} ${word}s`;
}

// An element with text; nothing that a show file says is ever read as markup.
function element(tag, text, properties) {
  const made = document.createElement(tag);
  if (text !== undefined) made.textContent = text;
  return Object.assign(made, properties);
}
