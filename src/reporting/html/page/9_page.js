// What stands around table, charts and view; then everything starts.

function fillVerdict() {
  const flagged = report.verdict === 'flagged';
  const many = report.paths.length > 1;
  const counts = report.errors + report.warnings === 0 ? 'nothing found'
    : `${counted(report.errors, 'error')}, ${counted(report.warnings, 'warning')}`;
  const which = many ? ` on ${report.paths.filter((path) => path.errors + path.warnings > 0).length} of ${report.paths.length} paths` : '';
  const node = byId('verdict');
  node.classList.add(report.verdict);
  const strict = report.strict ? '; warnings count' : '';
  node.replaceChildren(sign(flagged ? 'error' : 'clear'), element('span', {}, flagged ? 'FLAGGED' : 'CLEAR', ' ',
    element('small', {}, counts + (report.errors + report.warnings > 0 ? which : '') + strict)));
}

function fillPaths() {
  if (report.paths.length < 2) return;
  byId('paths').hidden = false;
  const rows = report.paths.map((path, index) => element('tr', {class: 'leads', click: () => setPath(index)},
    element('td', {}, element('button', {type: 'button'}, path.name || path.file)),
    element('td', {}, tag(path.verdict === 'flagged' ? 'error' : 'clear', path.verdict)),
    element('td', {class: 'number'}, String(path.errors)), element('td', {class: 'number'}, String(path.warnings)),
    element('td', {}, element('code', {}, path.file))));
  document.querySelector('#paths tbody').replaceChildren(...rows);
  on('path', () => rows.forEach((row, index) => {
    if (index === state.path) row.setAttribute('aria-current', 'true'); else row.removeAttribute('aria-current');
  }));
}

function fillAbout() {
  const path = current().given;
  const totals = path.totals;
  const start = path.start.joints.map((value, j) => `${path.joints[j].name} ${amount(value, path.joints[j].unit, 5)}`).join(', ');
  const settings = report.settings;
  const facts = [
    ['Path', [element('code', {}, path.file), path.name ? ` (${path.name})` : '']],
    ['Cell', [element('code', {}, path.cell_file), ` (${path.cell}), arm: ${path.arm}`]],
    ['Run', [`${counted(current().segmentCount, 'segment')}, ${plain(totals.length_mm, 5)} mm, ${plain(totals.duration_s)} s; ` +
      `${totals.samples} samples; continuity proven on ${plain(100 * totals.proven_fraction, 4)} % of it`]],
    ['Start', [`${path.start.origin}${path.start.branch ? `, branch ${path.start.branch}` : ''}: ${start}`]],
    ['Asked for', [`limit margin ${settings.limit_margin_deg} deg or ${settings.limit_margin_mm} mm, speed margin ` +
      `${plain(100 * settings.speed_margin)} %, singular below ${settings.singular_below}; samples at most ` +
      `${settings.step_mm} mm and ${settings.step_deg} deg apart`]],
    ...path.notes.map((note) => ['Note', [note]]),
  ];
  document.querySelector('#about dl').replaceChildren(...facts.flatMap(([name, words]) =>
    [element('dt', {}, name), element('dd', {}, ...words)]));
}

// Which waypoint, and where it stands in the path file.
function placeWords(path, row) {
  const i = path.segment[row] - 1;
  const {from, to, line, move} = path.segments;
  const lineOf = (k) => (k === 0 ? path.given.curves.start_line : line[k - 1]);
  const fraction = path.fraction[row];
  const at = fraction === 0 ? i : fraction === 1 ? i + 1 : -1;
  const name = (k) => (k === 0 ? from[0] : to[k - 1]);
  const near = fraction < 0.5 ? i : i + 1;
  const segment = `segment ${i + 1} (${move[i]}): ${from[i]} → ${to[i]}, ${plain(100 * fraction)} % of it`;
  return at >= 0 ? [`Waypoint ${name(at)}`, `line ${lineOf(at)} of the path file; ${segment}`]
    : [`Nearest waypoint: ${name(near)}`, `line ${lineOf(near)} of the path file; ${segment}`];
}

function jointRow(path, joint, j, row) {
  const noise = 1e-7;  // of a limit; below it a joint stands still
  const speed = Math.abs(path.speeds[j][row]) < noise ? 0 : path.speeds[j][row];
  const share = Math.abs(speed);
  const bar = element('span', {class: share > 1 || Number.isNaN(share) ? 'meter over' : 'meter'},
    element('i', {style: `width:${Number.isFinite(share) ? Math.min(100, 100 * share) : 100}%`}));
  const limited = joint.speed_limit !== null;
  const beyond = path.margin(j, row) < 0;
  return element('tr', {}, element('th', {scope: 'row'}, joint.name),
    element('td', {class: 'number'}, amount(path.positions[j][row], joint.unit) + (beyond ? ' !' : '')),
    element('td', {class: 'number'}, limited ? Number.isNaN(speed) ? 'unbounded' : amount(speed * joint.speed_limit, joint.unit + '/s', 3) : ''),
    element('td', {class: 'number'}, limited ? Number.isNaN(share) ? '!' : percent(share) + (share > 1 ? ' !' : '') : ''), element('td', {}, limited ? bar : ''));
}

function fillReadout() {
  const path = current();
  const row = state.row;
  if (path.rows === 0) { byId('readout').replaceChildren(element('p', {}, 'No part of the path was followed.')); return; }
  const [title, words] = placeWords(path, row);
  const head = [element('h3', {}, title), element('p', {}, words),
    element('p', {}, `${plain(path.time[row], 5)} s, ${plain(path.length[row], 5)} mm from the start`)];
  byId('cursor').value = String(row);
  byId('cursor').setAttribute('aria-valuetext', `${plain(path.time[row], 4)} seconds, ${title}, ${words}`);
  if (!path.isKnown(row)) {
    byId('readout').replaceChildren(...head, element('p', {}, 'Out of reach: no configuration meets the pose here.'));
    return;
  }
  const headings = ['', 'position', 'speed', '% of limit', ''].map((text) => element('th', {scope: 'col', class: 'number'}, text));
  byId('readout').replaceChildren(...head,
    element('p', {}, `σ min ${singular(path.singular[row])}; TCP at ${[0, 1, 2].map((k) => plain(path.tcp[3 * row + k], 5)).join(', ')} mm in the world`),
    element('div', {style: 'overflow-x:auto'}, element('table', {}, element('thead', {}, element('tr', {}, ...headings)),
      element('tbody', {}, ...path.joints.map((joint, j) => jointRow(path, joint, j, row))))));
}

const segmentsAtOnce = 200;
function segmentRow(path, i) {
  const s = path.segments;
  const unbounded = s.peak_ratio[i] === null;
  const over = unbounded || s.peak_ratio[i] > 1;
  const worst = unbounded ? 'unbounded' : percent(s.peak_ratio[i]);
  const unit = s.move[i] === 'joint' ? '%' : s.length_mm[i] > 0 ? 'mm/s' : 'deg/s';
  return element('tr', {class: 'leads', click: () => { showSegment(i); byId('along').scrollIntoView(); }},
    element('td', {}, element('button', {type: 'button', 'aria-label': `Segment ${i + 1}: show it`}, String(s.index[i]))),
    element('td', {}, `${s.from[i]} → ${s.to[i]}`), element('td', {}, s.move[i]), element('td', {class: 'number'}, String(s.line[i])),
    element('td', {class: 'number'}, plain(s.length_mm[i])), element('td', {class: 'number'}, plain(s.duration_s[i])),
    element('td', {class: 'number'}, over ? tag('error', worst) : worst), element('td', {}, s.peak_joint[i] ?? ''),
    element('td', {class: 'number'}, singular(s.min_singular_value[i], 3)),
    element('td', {class: 'number'}, s.limit_margin[i] === null ? '' : `${plain(s.limit_margin[i], 3)} (${s.limit_margin_joint[i]})`),
    element('td', {class: 'number'}, s.highest_speed[i] === null ? '' : amount(Math.floor(s.highest_speed[i] * 100) / 100, unit)),
    element('td', {class: 'number'}, String(s.findings[i].length || '')));
}

function fillSegments() {
  const path = current();
  const titles = ['No.', 'Segment', 'Move', 'Line', 'mm', 's', 'Worst speed', 'Joint', 'σ min', 'Limit margin', 'Holds to', 'Findings'];
  const body = element('tbody');
  const more = byId('more-segments');
  const add = () => {
    const from = body.children.length;
    for (let i = from; i < Math.min(path.segmentCount, from + segmentsAtOnce); ++i) body.append(segmentRow(path, i));
    const left = path.segmentCount - body.children.length;
    more.hidden = left === 0;
    more.textContent = `Show more (${left} left)`;
  };
  document.querySelector('#segments table').replaceChildren(
    element('thead', {}, element('tr', {}, ...titles.map((title) => element('th', {scope: 'col'}, title)))), body);
  more.onclick = add;
  add();
}

// Colours: as the system has them, light, dark; printing is always light.
const themes = ['system', 'light', 'dark'];
function setTheme(name) {
  if (name === 'system') delete document.documentElement.dataset.theme;
  else document.documentElement.dataset.theme = name;
  byId('theme').textContent = name === 'system' ? 'Colours: as the system' : `Colours: ${name}`;
  if (view) tell('colours');
}
let theme = 'system';

function preparePrint() {
  report.paths.forEach((path, index) => listOf(index));
  showList();
  setTheme('light');
  clearPaper();
  drawOnPaper();
}
function afterPrint() {
  clearPaper();
  setTheme(theme);
  fit();
}
function fit() {
  charts.forEach((chart) => chart.resize());
  view.resize();
}

function wire() {
  const click = (id, action) => byId(id).addEventListener('click', action);
  click('zoom-in', () => zoom(0.5));
  click('zoom-out', () => zoom(2));
  click('zoom-all', showAll);
  click('previous', () => stepFinding(-1));
  click('next', () => stepFinding(1));
  click('theme', () => { theme = themes[(themes.indexOf(theme) + 1) % themes.length]; setTheme(theme); });
  byId('cursor').addEventListener('input', (event) => { setCursor(Number(event.target.value)); followCursor(); });
  document.querySelectorAll('[name="domain"]').forEach((radio) =>
    radio.addEventListener('change', () => setDomain(radio.value)));
  document.querySelectorAll('[data-view]').forEach((button) =>
    button.addEventListener('click', () => view.from(button.dataset.view)));
  matchMedia('(prefers-color-scheme: dark)').addEventListener('change', () => tell('colours'));
  window.addEventListener('beforeprint', preparePrint);
  window.addEventListener('afterprint', afterPrint);
  let waiting = 0;
  window.addEventListener('resize', () => { clearTimeout(waiting); waiting = setTimeout(fit, 100); });
}

function fillFooter() {
  document.querySelector('footer').replaceChildren(element('p', {},
    `Written by pathvet ${report.tool_version}. Charts by dygraphs, space by three.js; both under the Expat licence, whose text is in this file.`));
}

on('path', () => {
  const path = current();
  fillAbout();
  fillSegments();
  const slider = byId('cursor');
  slider.max = String(Math.max(0, path.rows - 1));
  document.querySelectorAll('[name="domain"]').forEach((radio) => {
    radio.checked = radio.value === state.domain;
    radio.disabled = radio.value === 'length' && !(path.length[path.rows - 1] > 0);
  });
});
on('cursor', fillReadout);

let cursorWaiting = false;
on('cursor', () => {
  if (cursorWaiting) return;
  cursorWaiting = true;
  requestAnimationFrame(() => { cursorWaiting = false; charts.forEach((chart) => chart.cursor()); });
});

fillVerdict();
fillPaths();
fillFooter();
wire();
setPath(0);
document.documentElement.dataset.ready = 'true';
