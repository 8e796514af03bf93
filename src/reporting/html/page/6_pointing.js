// The charts as a whole, and how they are pointed at: mouse, finger, keys.

let charts = [];

function drawCharts() {
  charts.forEach((chart) => chart.graph.destroy());
  const path = current();
  charts = chartSpecs(path).filter((spec) => spec.series.length > 0).map((spec) => new Chart(path, spec));
  byId('charts').replaceChildren(...charts.map((chart) => chart.node));
  charts.forEach((chart) => {
    chart.draw();
    listenTo(chart);
  });
}

function listenTo(chart) {
  const plot = chart.plot;
  const place = (event) => event.clientX - plot.getBoundingClientRect().left;
  const xAt = (event) => chart.graph.toDataXCoord(place(event));
  let start = null;
  plot.addEventListener('pointermove', (event) => {
    if (start && start.shift) {
      const moved = (place(event) - start.at) / chart.graph.getArea().w * (start.window[1] - start.window[0]);
      setWindow(start.window[0] - moved, start.window[1] - moved);
      return;
    }
    setCursor(current().rowAtX(xAt(event), state.domain));
    if (!start) return;
    const [left, right] = [start.at, place(event)].sort((a, b) => a - b);
    const area = chart.graph.getArea();
    chart.brush.hidden = right - left < 5;
    Object.assign(chart.brush.style, {left: `${left}px`, width: `${right - left}px`, top: `${area.y}px`, height: `${area.h}px`});
  });
  plot.addEventListener('pointerdown', (event) => {
    setCursor(current().rowAtX(xAt(event), state.domain));
    // A finger moves the cursor; the buttons zoom.
    if (event.pointerType === 'touch' || event.button !== 0) return;
    start = {at: place(event), x: xAt(event), shift: event.shiftKey, window: state.window.slice()};
    plot.setPointerCapture(event.pointerId);
  });
  plot.addEventListener('pointerup', (event) => {
    if (start && !start.shift && !chart.brush.hidden) {
      const [from, to] = [start.x, xAt(event)].sort((a, b) => a - b);
      setWindow(from, to);
    }
    start = null;
    chart.brush.hidden = true;
  });
  plot.addEventListener('pointercancel', () => { start = null; chart.brush.hidden = true; });
  plot.addEventListener('dblclick', showAll);
}

const chartKeys = {
  ArrowLeft: (big) => setCursor(state.row - (big ? 10 : 1)),
  ArrowRight: (big) => setCursor(state.row + (big ? 10 : 1)),
  Home: () => setCursor(current().rowAtX(state.window[0], state.domain)),
  End: () => setCursor(current().rowAtX(state.window[1], state.domain)),
  '+': () => zoom(0.5), '=': () => zoom(0.5), '-': () => zoom(2), 0: showAll,
  n: () => stepFinding(1), p: () => stepFinding(-1),
};

function followCursor() {
  const x = current().x(state.row, state.domain);
  const [from, to] = state.window;
  if (x < from || x > to) setWindow(x - (to - from) / 2, x + (to - from) / 2);
}

byId('charts').addEventListener('keydown', (event) => {
  if (event.ctrlKey || event.altKey || event.metaKey || event.target.closest('button')) return;
  const action = chartKeys[event.key];
  if (!action) return;
  event.preventDefault();
  action(event.shiftKey);
  if (event.key.startsWith('Arrow')) followCursor();
});

on('path', drawCharts);
// Once a picture, however many events there were.
let windowWaiting = false;
on('window', () => {
  if (windowWaiting) return;
  windowWaiting = true;
  requestAnimationFrame(() => { windowWaiting = false; charts.forEach((chart) => chart.window()); });
});
on('domain', () => charts.forEach((chart) => chart.domain()));
on('colours', () => charts.forEach((chart) => chart.recolour()));
