// What the page shows now. Whoever draws listens; whoever is clicked calls one of the functions.

const state = {path: 0, domain: 'time', row: 0, window: [0, 1], finding: null};
const listeners = {path: [], cursor: [], window: [], domain: [], finding: [], colours: []};
const on = (what, call) => listeners[what].push(call);
const tell = (what) => listeners[what].forEach((call) => call());
const current = () => pathData(state.path);

function setPath(index) {
  state.path = index;
  const path = current();
  if (!(path.length[path.rows - 1] > 0)) state.domain = 'time';
  Object.assign(state, {row: 0, finding: null, window: path.extent(state.domain)});
  tell('path');
  tell('cursor');
  tell('finding');
}

function setCursor(row) {
  const last = current().rows - 1;
  const wanted = Math.max(0, Math.min(last, Math.round(row)));
  if (wanted === state.row) return;
  state.row = wanted;
  tell('cursor');
}

function setWindow(from, to) {
  const [low, high] = current().extent(state.domain);
  const width = Math.min(high - low, Math.max(to - from, (high - low) * 1e-6));
  const begin = Math.max(low, Math.min(high - width, from));
  state.window = [begin, begin + width];
  tell('window');
}

// The cursor stays where it is in the picture.
function zoom(factor) {
  const [from, to] = state.window;
  const x = current().x(state.row, state.domain);
  const centre = x >= from && x <= to ? x : (from + to) / 2;
  setWindow(centre - (centre - from) * factor, centre + (to - centre) * factor);
}

function showAll() { setWindow(...current().extent(state.domain)); }

function setDomain(domain) {
  if (domain === state.domain) return;
  const path = current();
  const rows = state.window.map((x) => path.rowAtX(x, state.domain));
  const whole = state.window[1] - state.window[0] >= path.extent(state.domain)[1] * 0.999;
  state.domain = domain;
  tell('domain');
  if (whole) showAll(); else setWindow(path.x(rows[0], domain), path.x(rows[1], domain));
  tell('cursor');
}

// Moves the cursor to a finding's worst place and the charts to its stretch.
function showFinding(index) {
  const path = current();
  const finding = path.findings[index];
  state.finding = index;
  const {begin, end} = path.stretch(finding, state.domain);
  const [low, high] = path.extent(state.domain);
  const room = Math.max((end - begin) * 0.75, (high - low) * 0.01);
  setWindow(begin - room, end + room);
  state.row = path.rowAt(finding.segment, finding.peak);
  tell('cursor');
  tell('finding');
}

function stepFinding(direction) {
  const count = current().findings.length;
  if (count === 0) return;
  const start = direction > 0 ? -1 : count;
  const from = state.finding === null ? start : state.finding;
  showFinding((from + direction + count) % count);
}

function showSegment(index) {
  const path = current();
  const begins = state.domain === 'time' ? path.beginTime : path.beginLength;
  const room = (begins[index + 1] - begins[index]) * 0.1;
  setWindow(begins[index] - room, begins[index + 1] + room);
  setCursor(path.rowAt(index + 1, 0.5));
}
