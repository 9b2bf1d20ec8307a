(() => {
  "use strict";
  const live = document.getElementById("swing-live");
  const d = JSON.parse(document.getElementById("swing-data").textContent);
  const canvas = live.querySelector("canvas");
  const readout = live.querySelector(".readout");
  const pen = canvas.getContext("2d");
  const n = d.t.length;
  const first = d.t[0], last = d.t[n - 1];
  const residual = d.y.map((y, i) => (y === null || d.f[i] === null ? null : y - d.f[i]));
  const EDGE = { left: 62, right: 14, top: 12, gap: 26, bottom: 40 };
  let from = first, to = last, at = -1, drag = null;

  const below = (time) => {               // the first sample at or after a time
    let low = 0, high = n;
    while (low < high) { const mid = (low + high) >> 1; if (d.t[mid] < time) low = mid + 1; else high = mid; }
    return low;
  };
  const nearest = (time) => {
    const i = Math.min(below(time), n - 1);
    return i > 0 && time - d.t[i - 1] < d.t[i] - time ? i - 1 : i;
  };
  let dress = {};                         // the page's colours, read once for each drawing
  const colour = (name) => dress[name];
  const dressUp = () => {
    const style = getComputedStyle(document.documentElement);
    for (const name of ["--ink", "--faint", "--shade", "--data", "--fit", "--figure-type"]) dress[name] = style.getPropertyValue(name).trim();
  };
  const number = (value, digits) => value.toFixed(digits).replace("-", "\u2212");

  const steps = (low, high, wanted) => {
    const rough = (high - low) / wanted, power = 10 ** Math.floor(Math.log10(rough));
    const step = [1, 2, 2.5, 5, 10].map((m) => m * power).find((s) => s >= rough);
    const ticks = [];
    for (let k = Math.ceil(low / step); k * step <= high + 1e-9 * step; k++) ticks.push(k * step);
    return { ticks, digits: Math.max(0, (/^2.5/.test(step.toPrecision(2)) ? 1 : 0) - Math.floor(Math.log10(step) + 1e-9)) };
  };
  const span = (columns, i0, i1) => {
    let low = Infinity, high = -Infinity;
    for (const column of columns) for (let i = i0; i < i1; i++) {
      const v = column[i];
      if (v !== null) { if (v < low) low = v; if (v > high) high = v; }
    }
    if (!(low <= high)) return [-1, 1];
    const room = 0.06 * (high - low) || Math.abs(high) || 1;
    return [low - room, high + room];
  };

  function draw() {
    const width = canvas.clientWidth, height = canvas.clientHeight, ratio = window.devicePixelRatio || 1;
    if (!width || !height) return;
    dressUp();
    canvas.width = Math.round(width * ratio); canvas.height = Math.round(height * ratio);
    pen.setTransform(ratio, 0, 0, ratio, 0, 0);
    pen.font = "12.5px " + colour("--figure-type");
    const right = width - EDGE.right, inner = height - EDGE.top - EDGE.gap - EDGE.bottom;
    const X = (t) => EDGE.left + (t - from) / (to - from) * (right - EDGE.left);
    const i0 = Math.max(0, below(from) - 1), i1 = Math.min(n, below(to) + 2);
    const panels = [
      { y0: EDGE.top, y1: EDGE.top + 0.7 * inner, columns: [d.y, d.f], label: "swing, " + d.unit },
      { y0: EDGE.top + 0.7 * inner + EDGE.gap, y1: height - EDGE.bottom, columns: [residual], label: "residual, " + d.unit },
    ];
    panels.forEach((p, index) => {
      const [low, high] = span(p.columns, i0, i1);
      const Y = (v) => p.y1 - (v - low) / (high - low) * (p.y1 - p.y0);
      pen.save();
      pen.beginPath(); pen.rect(EDGE.left, p.y0, right - EDGE.left, p.y1 - p.y0); pen.clip();
      pen.fillStyle = colour("--shade");  // what does not swing freely
      pen.fillRect(X(first), p.y0, X(d.from) - X(first), p.y1 - p.y0);
      pen.fillRect(X(d.to), p.y0, X(last) - X(d.to), p.y1 - p.y0);
      if (index === 1) { pen.strokeStyle = colour("--faint"); line([[EDGE.left, Y(0)], [right, Y(0)]]); }
      if (index === 0) { pen.strokeStyle = colour("--fit"); pen.lineWidth = 2; curve(d.f, i0, i1, X, Y); }
      const column = p.columns[0], size = Math.min(3, Math.max(1.3, 240 / Math.sqrt(i1 - i0) / 8));
      for (let i = i0; i < i1; i++) {
        if (column[i] === null) continue;
        const x = X(d.t[i]), y = Y(column[i]);
        if (d.used[i] === "1") { pen.fillStyle = colour("--data"); pen.fillRect(x - size / 2, y - size / 2, size, size); }
        else if (d.t[i] >= d.from && d.t[i] <= d.to) {
          pen.strokeStyle = colour("--ink"); pen.lineWidth = 1.3;
          line([[x - 4, y - 4], [x + 4, y + 4]]); line([[x - 4, y + 4], [x + 4, y - 4]]);
        }
      }
      if (at >= 0) {
        pen.strokeStyle = colour("--ink"); pen.lineWidth = 1; line([[X(d.t[at]), p.y0], [X(d.t[at]), p.y1]]);
        if (column[at] !== null) { pen.beginPath(); pen.arc(X(d.t[at]), Y(column[at]), 5, 0, 7); pen.stroke(); }
      }
      if (drag) {
        pen.fillStyle = colour("--data"); pen.globalAlpha = 0.18;
        pen.fillRect(X(drag[0]), p.y0, X(drag[1]) - X(drag[0]), p.y1 - p.y0); pen.globalAlpha = 1;
      }
      pen.restore();
      axis(p, low, high, Y, right, index === 1, X);
    });
  }
  function line(points) { pen.beginPath(); points.forEach((p, i) => (i ? pen.lineTo(...p) : pen.moveTo(...p))); pen.stroke(); }
  function curve(column, i0, i1, X, Y) {
    pen.beginPath();
    for (let i = i0, up = true; i < i1; i++) {
      if (column[i] === null) { up = true; continue; }
      if (up) pen.moveTo(X(d.t[i]), Y(column[i])); else pen.lineTo(X(d.t[i]), Y(column[i]));
      up = false;
    }
    pen.stroke();
  }
  function axis(p, low, high, Y, right, lowest, X) {
    pen.strokeStyle = colour("--faint"); pen.lineWidth = 1; pen.fillStyle = colour("--ink");
    line([[EDGE.left, p.y0], [EDGE.left, p.y1], [right, p.y1]]);
    const up = steps(low, high, Math.max(3, (p.y1 - p.y0) / 34));
    pen.textAlign = "right"; pen.textBaseline = "middle";
    for (const v of up.ticks) { line([[EDGE.left - 4, Y(v)], [EDGE.left, Y(v)]]); pen.fillText(number(v, up.digits), EDGE.left - 7, Y(v)); }
    const along = steps(from, to, Math.max(2, (right - EDGE.left) / 90));
    pen.textAlign = "center"; pen.textBaseline = "top";
    for (const v of along.ticks) {
      line([[X(v), p.y1], [X(v), p.y1 + 4]]);
      if (lowest) pen.fillText(number(v, along.digits), X(v), p.y1 + 7);
    }
    if (lowest) pen.fillText("time, s", (EDGE.left + right) / 2, p.y1 + 23);
    pen.save(); pen.translate(13, (p.y0 + p.y1) / 2); pen.rotate(-Math.PI / 2);
    pen.textBaseline = "middle"; pen.fillText(p.label, 0, 0); pen.restore();
  }

  function read(i) {
    at = Math.max(0, Math.min(n - 1, i));
    const t = d.t[at], part = [number(t, 3) + " s"];
    if (d.y[at] !== null) part.push("measured " + number(d.y[at], d.digits) + d.gap + d.unit);
    if (d.f[at] !== null) part.push("fit " + number(d.f[at], d.digits) + d.gap + d.unit);
    if (residual[at] !== null) part.push("residual " + number(residual[at], d.digits) + d.gap + d.unit);
    if (d.used[at] !== "1") part.push(t >= d.from && t <= d.to ? "set aside by the fit" : "not the free swing");
    const text = part.join(" · ");
    readout.textContent = text;
    canvas.setAttribute("aria-valuenow", t.toFixed(3)); canvas.setAttribute("aria-valuetext", text);
    if (t < from || t > to) show(from + t - (from + to) / 2, to + t - (from + to) / 2); else draw();
  }
  function show(a, b) {
    const least = Math.min(last - first, 8 * (last - first) / n), wide = Math.min(last - first, Math.max(least, b - a));
    const middle = (a + b) / 2;
    from = Math.max(first, Math.min(last - wide, middle - wide / 2)); to = from + wide;
    draw();
  }
  function zoom(factor) {
    const middle = at >= 0 && d.t[at] >= from && d.t[at] <= to ? d.t[at] : (from + to) / 2;
    const left = (middle - from) * factor, rest = (to - middle) * factor;
    show(middle - left, middle + rest);
  }
  const move = (part) => show(from + part * (to - from), to + part * (to - from));
  const deeds = { in: () => zoom(0.5), out: () => zoom(2), earlier: () => move(-0.4), later: () => move(0.4), whole: () => show(first, last) };
  live.querySelectorAll("button").forEach((b) => b.addEventListener("click", () => deeds[b.dataset.deed]()));
  const timeAt = (event) => {
    const box = canvas.getBoundingClientRect();
    const part = (event.clientX - box.left - EDGE.left) / (box.width - EDGE.left - EDGE.right);
    return from + Math.max(0, Math.min(1, part)) * (to - from);
  };
  canvas.addEventListener("pointerdown", (e) => { if (e.pointerType !== "touch" && e.button === 0) { drag = [timeAt(e), timeAt(e)]; canvas.setPointerCapture(e.pointerId); } else read(nearest(timeAt(e))); });
  canvas.addEventListener("pointermove", (e) => { if (drag) drag[1] = timeAt(e); read(nearest(timeAt(e))); });
  canvas.addEventListener("pointerup", () => {
    if (drag && Math.abs(drag[1] - drag[0]) > 0.01 * (to - from)) { const [a, b] = drag; drag = null; show(Math.min(a, b), Math.max(a, b)); } else { drag = null; draw(); }
  });
  canvas.addEventListener("pointercancel", () => { drag = null; draw(); });
  canvas.addEventListener("dblclick", deeds.whole);
  canvas.addEventListener("keydown", (e) => {
    if (e.ctrlKey || e.metaKey || e.altKey) return;
    const stride = e.shiftKey ? 10 : 1, here = at < 0 ? below(from) : at;
    const keys = {
      ArrowRight: () => read(here + stride), ArrowLeft: () => read(here - stride), ArrowUp: () => read(here + stride), ArrowDown: () => read(here - stride),
      PageUp: deeds.later, PageDown: deeds.earlier, Home: () => read(0), End: () => read(n - 1),
      "+": deeds.in, "=": deeds.in, "-": deeds.out, "0": deeds.whole, Escape: deeds.whole,
    };
    if (keys[e.key]) { keys[e.key](); e.preventDefault(); }
  });

  live.hidden = false;
  document.getElementById("swing-static").hidden = true;
  new ResizeObserver(draw).observe(canvas);
  window.matchMedia("(prefers-color-scheme: dark)").addEventListener("change", draw);
})();
