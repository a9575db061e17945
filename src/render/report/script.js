// Values under the pointer or the arrow keys; without this script everything stands.
document.querySelectorAll("figure.chart").forEach(function (figure) {
  var data = figure.querySelector("script.data"), sheet = figure.querySelector(".sheet");
  if (!data) return;
  data = JSON.parse(data.textContent);
  if (!data.panels.length) return;
  var svg = sheet.querySelector("svg"), first = data.panels[0].frame, end = data.panels[data.panels.length - 1].frame;
  var from = data.window[0], to = data.window[1], units = 8, width = svg.viewBox.baseVal.width / units, now = from;
  var line = document.createElementNS("http://www.w3.org/2000/svg", "path");
  line.setAttribute("stroke", "#1C2733"); line.setAttribute("stroke-width", "6"); line.setAttribute("class", "cursor");
  svg.appendChild(line);
  var readout = document.createElement("p");
  readout.className = "readout";
  readout.textContent = "Move over the chart for values; arrow keys when it has the focus.";
  figure.insertBefore(readout, sheet);
  function value(pieces, t) {
    for (var p = 0; p < pieces.length; p++) {
      var piece = pieces[p], low = 0, high = piece.length / 2 - 1;
      if (piece[0] > t || piece[2 * high] < t) continue;
      while (high - low > 1) { var middle = (low + high) >> 1; if (piece[2 * middle] <= t) low = middle; else high = middle; }
      var a = piece[2 * low], b = piece[2 * high], share = b > a ? (t - a) / (b - a) : 0;
      return piece[2 * low + 1] + share * (piece[2 * high + 1] - piece[2 * low + 1]);
    }
    return null;
  }
  function written(number) { return number === null ? "–" : String(+number.toPrecision(4)).replace("-", "\u2212"); }
  function show(t) {
    now = Math.min(to, Math.max(from, t));
    var x = (first[0] + (now - from) / (to - from) * first[2]) * units;
    line.setAttribute("d", "M" + x + " " + first[1] * units + "V" + (end[1] + end[3]) * units);
    var parts = [written(now) + " s"];
    data.panels.forEach(function (panel) {
      panel.curves.forEach(function (curve) {
        parts.push(curve.label + " " + written(value(curve.pieces, now)) + " " + panel.unit.split(",")[0]);
      });
    });
    readout.textContent = parts.join(" · ");
  }
  svg.addEventListener("pointermove", function (event) {
    var box = svg.getBoundingClientRect(), x = (event.clientX - box.left) / box.width * width;
    show(from + (x - first[0]) / first[2] * (to - from));
  });
  sheet.addEventListener("keydown", function (event) {
    var step = (to - from) / (event.shiftKey ? 20 : 400);
    if (event.key === "ArrowRight") show(now + step);
    else if (event.key === "ArrowLeft") show(now - step);
    else if (event.key === "Home") show(from);
    else if (event.key === "End") show(to);
    else return;
    event.preventDefault();
  });
});
