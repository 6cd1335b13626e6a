// Drawing that the two graphs share: inks of the page, and a canvas in CSS pixels at the screen's own resolution.

const INKS = ["text", "soft", "hair", "ground", "motor-a", "motor-b", "error", "warning", "band", "light", "morph"];

// The page's colours, read anew when the system changes between dark and light.
function readInks() {
  const style = getComputedStyle(document.documentElement);
  return Object.fromEntries(INKS.map((name) => [name, style.getPropertyValue(`--${name}`).trim()]));
}

class Graph {
  constructor(canvas) {
    this.canvas = canvas;
    this.context = canvas.getContext("2d");
    this.inks = readInks();
    this.fit();
  }

  // Says whether the size changed.
  fit() {
    const ratio = Math.min(window.devicePixelRatio || 1, 3);
    const [width, height] = [this.canvas.clientWidth, this.canvas.clientHeight];
    if (width === this.width && height === this.height && ratio === this.ratio) return false;
    Object.assign(this, { width, height, ratio });
    this.canvas.width = Math.round(width * ratio);
    this.canvas.height = Math.round(height * ratio);
    this.context.setTransform(ratio, 0, 0, ratio, 0, 0);
    return true;
  }

  wipe() {
    this.context.clearRect(0, 0, this.width, this.height);
  }

  line(x1, y1, x2, y2, ink, width = 1, dash = []) {
    const { context } = this;
    context.setLineDash(dash);
    context.lineWidth = width;
    context.strokeStyle = ink;
    context.beginPath();
    context.moveTo(x1, y1);
    context.lineTo(x2, y2);
    context.stroke();
    context.setLineDash([]);
  }

  area(x, y, width, height, ink) {
    this.context.fillStyle = ink;
    this.context.fillRect(x, y, width, height);
  }

  text(words, x, y, ink, { align = "left", bold = false, size = 12 } = {}) {
    const { context } = this;
    context.font = `${bold ? "bold " : ""}${size}px "Noto Sans", system-ui, sans-serif`;
    context.textAlign = align;
    context.fillStyle = ink;
    context.fillText(words, x, y);
  }

  // A curve through `values`, one for each of the places `xs`.
  curve(xs, values, toY, ink, dash = []) {
    const { context } = this;
    context.setLineDash(dash);
    context.lineWidth = 2;
    context.lineJoin = "round";
    context.strokeStyle = ink;
    context.beginPath();
    xs.forEach((x, at) => (at === 0 ? context.moveTo(x, toY(values[at])) : context.lineTo(x, toY(values[at]))));
    context.stroke();
    context.setLineDash([]);
  }

  // The parts of a curve that are past a limit, drawn over it in the colour of errors.
  past(xs, values, toY, limit) {
    const { context } = this;
    context.lineWidth = 4;
    context.strokeStyle = this.inks.error;
    context.beginPath();
    for (let at = 1; at < xs.length; at += 1) {
      if (Math.max(Math.abs(values[at]), Math.abs(values[at - 1])) <= limit) continue;
      context.moveTo(xs[at - 1], toY(values[at - 1]));
      context.lineTo(xs[at], toY(values[at]));
    }
    context.stroke();
  }
}
