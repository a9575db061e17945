// Values under the pointer or the arrow keys, and a closer look by dragging; without this script
// everything stands. Pictures are drawn in units of an eighth of a CSS pixel.
(function () {
var UNITS = 8, SPACE = "http://www.w3.org/2000/svg", all = [];

function written(number) {
  return number === null ? "–" : String(+number.toPrecision(4)).replace("-", "\u2212");
}

// Place of the last point of a flat list [t, v, t, v, ...] that is not after t.
function before(list, t) {
  var low = 0, high = list.length / 2 - 1;
  while (high - low > 1) {
    var middle = (low + high) >> 1;
    if (list[2 * middle] <= t) low = middle; else high = middle;
  }
  return low;
}

function between(list, place, t) {
  var a = list[2 * place], b = list[2 * place + 2];
  var share = b > a ? (t - a) / (b - a) : 0;
  return list[2 * place + 1] + share * (list[2 * place + 3] - list[2 * place + 1]);
}

function valueAt(pieces, t) {
  for (var p = 0; p < pieces.length; p++) {
    var piece = pieces[p];
    if (piece[0] <= t && piece[piece.length - 2] >= t) return between(piece, before(piece, t), t);
  }
  return null;
}

// The part of a piece from a to b, cut at its ends.
function cut(piece, a, b) {
  var end = piece[piece.length - 2], part = [];
  if (end < a || piece[0] > b || piece.length < 4) return part;
  var from = piece[0] < a ? before(piece, a) : -1;
  if (from >= 0) part.push(a, between(piece, from, a));
  for (var i = from + 1; 2 * i < piece.length && piece[2 * i] <= b; i++) part.push(piece[2 * i], piece[2 * i + 1]);
  if (end > b) part.push(b, between(piece, before(piece, b), b));
  return part;
}

// Steps of 1, 2 or 5 times a power of ten.
function ticks(from, to, most) {
  var rough = (to - from) / most, power = Math.pow(10, Math.floor(Math.log10(rough))), step = 10 * power;
  [5, 2, 1].forEach(function (factor) { if (factor * power >= rough * 0.999999) step = factor * power; });
  var list = [];
  for (var k = Math.ceil(from / step - 1e-6); k * step <= to + 1e-6 * step; k++) list.push(k * step);
  return { step: step, list: list };
}

function Chart(figure, data) {
  this.figure = figure;
  this.data = data;
  this.sheet = figure.querySelector(".sheet");
  this.svg = this.sheet.querySelector("svg");
  this.whole = data.window;
  this.from = data.window[0];
  this.to = data.window[1];
  this.now = this.from;
  this.still = null;
  var first = data.panels[0].frame, last = data.panels[data.panels.length - 1].frame;
  this.left = first[0];
  this.width = first[2];
  this.top = first[1];
  this.bottom = last[1] + last[3];
  this.furnish();
  this.listen();
}

Chart.prototype.x = function (t) { return (this.left + (t - this.from) / (this.to - this.from) * this.width) * UNITS; };

Chart.prototype.make = function (name, attributes, parent) {
  var element = document.createElementNS(SPACE, name);
  Object.keys(attributes).forEach(function (key) { element.setAttribute(key, attributes[key]); });
  (parent || this.svg).appendChild(element);
  return element;
};

Chart.prototype.furnish = function () {
  this.band = this.make("path", { fill: "#C9D0D8", "fill-opacity": 0.5, "class": "cursor" });
  this.line = this.make("path", { stroke: "#1C2733", "stroke-width": 6, "class": "cursor" });
  this.readout = document.createElement("p");
  this.readout.className = "readout";
  this.readout.setAttribute("role", "status");
  this.readout.textContent = "Move over the chart for values, drag for a closer look. With the focus: arrow keys, + and \u2212, Esc.";
  this.back = document.createElement("button");
  this.back.type = "button";
  this.back.className = "back";
  this.back.textContent = "Whole run";
  this.back.hidden = true;
  this.figure.insertBefore(this.readout, this.sheet);
  this.figure.insertBefore(this.back, this.sheet);
};

Chart.prototype.show = function (t) {
  this.now = Math.min(this.to, Math.max(this.from, t));
  var now = this.now, parts = [written(now) + " s"];
  this.line.setAttribute("d", "M" + this.x(now) + " " + this.top * UNITS + "V" + this.bottom * UNITS);
  this.data.panels.forEach(function (panel) {
    var unit = " " + panel.unit.split(",")[0];
    panel.curves.forEach(function (curve) { parts.push(curve.label + " " + written(valueAt(curve.pieces, now)) + unit); });
    panel.dots.forEach(function (dots) {
      var list = dots.points, place = before(list, now);
      if (list.length < 2 || list[0] > now || list[list.length - 2] < now) return;
      var nearer = list.length > 2 && now - list[2 * place] > list[2 * place + 2] - now ? place + 1 : place;
      parts.push("measured, " + dots.label + " " + written(list[2 * nearer + 1]) + unit);
    });
  });
  this.readout.textContent = parts.join(" · ");
};

// The points of a curve, from a figure that shows this time closer when there is one.
Chart.prototype.finest = function (panel, curve) {
  var best = curve.pieces, width = this.whole[1] - this.whole[0], from = this.from, to = this.to;
  all.forEach(function (other) {
    var window = other.data.window, span = window[1] - window[0];
    if (span >= width || window[0] > from || window[1] < to) return;
    other.data.panels.forEach(function (near) {
      if (near.id !== panel.id || near.unit !== panel.unit) return;
      near.curves.forEach(function (same) { if (same.label === curve.label) { best = same.pieces; width = span; } });
    });
  });
  return best;
};

// Shows the time from a to b; the picture as it was drawn is kept aside.
Chart.prototype.zoom = function (a, b) {
  var least = (this.whole[1] - this.whole[0]) * 1e-5, chart = this;
  a = Math.max(this.whole[0], a);
  b = Math.min(this.whole[1], b);
  if (!(b - a > least)) return;
  this.restore();
  if (a <= this.whole[0] && b >= this.whole[1]) return;
  this.still = this.drawn().map(function (node) { return node.cloneNode(true); });
  this.from = a;
  this.to = b;
  this.data.panels.forEach(function (panel) { chart.panel(panel); });
  this.svg.querySelectorAll("g.m").forEach(function (mark) { chart.move(mark); });
  this.svg.querySelectorAll("g.b").forEach(function (bar) { chart.stretch(bar); });
  this.svg.querySelectorAll("g.x").forEach(function (group) { chart.axis(group); });
  this.back.hidden = false;
  this.figure.classList.add("zoomed");
  this.show(this.now);
};

// What was drawn, without what this script adds.
Chart.prototype.drawn = function () {
  var added = [this.band, this.line];
  return Array.prototype.filter.call(this.svg.childNodes, function (node) { return added.indexOf(node) < 0; });
};

Chart.prototype.restore = function () {
  if (this.still) {
    var svg = this.svg, above = this.band;
    this.drawn().forEach(function (node) { node.remove(); });
    this.still.forEach(function (node) { svg.insertBefore(node, above); });
  }
  this.still = null;
  this.from = this.whole[0];
  this.to = this.whole[1];
  this.back.hidden = true;
  this.figure.classList.remove("zoomed");
};

Chart.prototype.panel = function (panel) {
  var chart = this, group = null;
  this.svg.querySelectorAll("g.p").forEach(function (one) { if (one.id.slice(-panel.id.length - 1) === "-" + panel.id) group = one; });
  if (!group) return;
  function y(value) {
    return (panel.frame[1] + panel.frame[3] * (panel.up[1] - value) / (panel.up[1] - panel.up[0])) * UNITS;
  }
  // Curves are drawn from the last to the first, so that the first lies on top.
  group.querySelectorAll("g.s").forEach(function (drawn, place) {
    var curve = panel.curves[panel.curves.length - 1 - place];
    if (!curve) return;
    var dashed = drawn.querySelector("[stroke-dasharray]"), look = { fill: "none", stroke: curve.ink, "stroke-width": Math.round(curve.width * UNITS) };
    if (dashed) look["stroke-dasharray"] = dashed.getAttribute("stroke-dasharray");
    drawn.textContent = "";
    chart.finest(panel, curve).forEach(function (piece) {
      var part = cut(piece, chart.from, chart.to), points = [];
      for (var i = 0; i < part.length; i += 2) points.push(chart.x(part[i]).toFixed(1) + "," + y(part[i + 1]).toFixed(1));
      if (points.length > 1) chart.make("polyline", Object.assign({ points: points.join(" ") }, look), drawn);
    });
  });
  if (panel.slips) this.slips(panel, group);
  group.querySelectorAll("g.d").forEach(function (drawn, place) {
    var list = panel.dots[place] ? panel.dots[place].points : [];
    drawn.textContent = "";
    for (var i = 0; i < list.length; i += 2) {
      if (list[i] < chart.from || list[i] > chart.to) continue;
      chart.make("circle", { cx: chart.x(list[i]).toFixed(1), cy: y(list[i + 1]).toFixed(1), r: 10, fill: "#8A94A0" }, drawn);
    }
  });
};

// Slips that were drawn as one mark for want of room stand apart again.
Chart.prototype.slips = function (panel, group) {
  var chart = this, known = {}, pattern = {}, most = 400;
  group.querySelectorAll("g.m[data-kind=slip]").forEach(function (mark) {
    known[+mark.getAttribute("data-t")] = true;
    pattern[mark.getAttribute("data-direction")] = mark;
  });
  panel.slips.forEach(function (slip) {
    var like = pattern[slip[1]];
    if (!like || known[slip[0]] || slip[0] < chart.from || slip[0] > chart.to || most-- <= 0) return;
    var mark = like.cloneNode(true);
    mark.setAttribute("data-drawn", like.getAttribute("data-drawn") || like.getAttribute("data-t"));
    mark.setAttribute("data-t", slip[0]);
    group.appendChild(mark);
  });
};

// Marks that stand at a time keep their shape and move; those outside go.
Chart.prototype.move = function (mark) {
  var t = +mark.getAttribute("data-t"), span = this.whole[1] - this.whole[0];
  if (t < this.from || t > this.to) { mark.remove(); return; }
  var at = mark.hasAttribute("data-drawn") ? +mark.getAttribute("data-drawn") : t;
  var drawn = (this.left + (at - this.whole[0]) / span * this.width) * UNITS;
  mark.setAttribute("transform", "translate(" + (this.x(t) - drawn).toFixed(1) + ")");
};

Chart.prototype.stretch = function (bar) {
  var start = Math.max(this.from, +bar.getAttribute("data-t")), end = Math.min(this.to, +bar.getAttribute("data-u"));
  var rect = bar.querySelector("rect");
  if (!rect || end < start) { bar.remove(); return; }
  rect.setAttribute("x", this.x(start).toFixed(1));
  rect.setAttribute("width", Math.max(UNITS, this.x(end) - this.x(start)).toFixed(1));
};

// New ticks in the place of the old ones; the last text of the axis is its name.
Chart.prototype.axis = function (group) {
  var chart = this, lines = group.querySelectorAll("polyline, line"), texts = group.querySelectorAll("text");
  if (!lines.length) return;
  var short = this.to - this.from < 0.1, scale = short ? 1000 : 1;
  var found = ticks(this.from * scale, this.to * scale, 6), line = lines[0], box = line.getBBox();
  var decimals = Math.max(0, -Math.floor(Math.log10(found.step) + 1e-9));
  var number = texts.length > 1 ? texts[0].cloneNode(true) : null;
  lines.forEach(function (old) { old.remove(); });
  texts.forEach(function (old, place) { if (place < texts.length - 1) old.remove(); });
  if (texts.length) texts[texts.length - 1].textContent = short ? "Time, ms" : "Time, s";
  found.list.forEach(function (value) {
    var x = chart.x(value / scale).toFixed(1);
    chart.make("path", { d: "M" + x + " " + box.y + "V" + (box.y + box.height), stroke: line.getAttribute("stroke"), "stroke-width": line.getAttribute("stroke-width") }, group);
    if (!number) return;
    var text = number.cloneNode(true);
    text.setAttribute("x", x);
    text.textContent = value.toFixed(decimals).replace("-", "\u2212");
    group.appendChild(text);
  });
};

Chart.prototype.timeAt = function (event) {
  var box = this.svg.getBoundingClientRect(), x = (event.clientX - box.left) / box.width * this.svg.viewBox.baseVal.width / UNITS;
  return this.from + (x - this.left) / this.width * (this.to - this.from);
};

Chart.prototype.closer = function (factor) {
  var half = (this.to - this.from) * factor / 2, middle = Math.min(this.whole[1] - half, Math.max(this.whole[0] + half, this.now));
  this.zoom(middle - half, middle + half);
};

Chart.prototype.pan = function (share) {
  var span = this.to - this.from, start = Math.min(this.whole[1] - span, Math.max(this.whole[0], this.from + share * span));
  this.zoom(start, start + span);
  this.show(this.now);
};

Chart.prototype.listen = function () {
  var chart = this, begun = null, svg = this.svg;
  function within(t) { return Math.min(chart.to, Math.max(chart.from, t)); }
  function mark(a, b) {
    chart.band.setAttribute("d", a === b ? "" : "M" + chart.x(a) + " " + chart.top * UNITS + "H" + chart.x(b) + "V" + chart.bottom * UNITS + "H" + chart.x(a) + "Z");
  }
  svg.addEventListener("pointerdown", function (event) {
    if (event.button !== 0) return;
    begun = within(chart.timeAt(event));
    if (svg.setPointerCapture) try { svg.setPointerCapture(event.pointerId); } catch (gone) { /* the pointer has left */ }
  });
  svg.addEventListener("pointermove", function (event) {
    var t = chart.timeAt(event);
    chart.show(t);
    if (begun !== null) mark(begun, within(t));
  });
  svg.addEventListener("pointerup", function (event) {
    var from = begun, to = within(chart.timeAt(event));
    begun = null;
    mark(0, 0);
    if (from !== null && Math.abs(to - from) / (chart.to - chart.from) * chart.width > 6) chart.zoom(Math.min(from, to), Math.max(from, to));
  });
  svg.addEventListener("pointercancel", function () { begun = null; mark(0, 0); });
  svg.addEventListener("dblclick", function () { chart.restore(); chart.show(chart.now); });
  this.back.addEventListener("click", function () { chart.restore(); chart.show(chart.now); chart.sheet.focus(); });
  this.sheet.addEventListener("keydown", function (event) {
    var step = (chart.to - chart.from) / (event.shiftKey ? 20 : 400);
    switch (event.key) {
    case "ArrowRight": chart.show(chart.now + step); break;
    case "ArrowLeft": chart.show(chart.now - step); break;
    case "Home": chart.show(chart.from); break;
    case "End": chart.show(chart.to); break;
    case "+": case "=": chart.closer(0.5); break;
    case "-": chart.closer(2); break;
    case "PageDown": if (!chart.still) return; chart.pan(0.5); break;
    case "PageUp": if (!chart.still) return; chart.pan(-0.5); break;
    case "Escape": case "0": begun = null; mark(0, 0); chart.restore(); chart.show(chart.now); break;
    default: return;
    }
    event.preventDefault();
  });
};

document.querySelectorAll("figure.chart").forEach(function (figure) {
  var text = figure.querySelector("script.data");
  if (!text) return;
  var data = JSON.parse(text.textContent);
  if (data.panels.length) all.push(new Chart(figure, data));
});
window.addEventListener("beforeprint", function () { all.forEach(function (chart) { chart.restore(); }); });
})();
