// The charts: worst things first, one shared cursor and one shared stretch of the path.

const dashes = [null, [9, 4], [2, 3], [12, 4, 2, 4], [5, 5], [16, 4], [2, 6], [9, 3, 2, 3, 2, 3]];
const seriesColour = (i) => colour('s' + (i % 8));
const seriesDash = (i) => dashes[(i + Math.floor(i / 8)) % dashes.length];

// What each chart shows: its series as functions of the row, the bands behind them, and which findings belong to it.
function chartSpecs(path) {
  const settings = report.settings;
  const specs = [];
  const quick = path.joints.map((joint, j) => j).filter((j) => path.joints[j].speed_limit !== null);
  specs.push({
    key: 'speed', title: 'Joint speed, % of limit', height: 190, legend: true,
    series: quick.map((j) => ({joint: j, name: path.joints[j].name, at: (row) => 100 * Math.abs(path.speeds[j][row])})),
    bands: [{from: 100, to: Infinity, name: 'beyond'}, {from: 100 * settings.speed_margin, to: 100, name: 'near'}],
    range: (low, high) => [0, Math.max(112, high * 1.05)],
    findings: (f) => f.code === 'joint-speed' || f.code === 'speed-margin' || f.code === 'joint-acceleration',
  });
  const margins = [['deg', settings.limit_margin_deg, 'turning'], ['mm', settings.limit_margin_mm, 'sliding']];
  for (const [unit, asked, kind] of margins) {
    if (!path.joints.some((joint) => joint.unit === unit && joint.lower !== null)) continue;
    specs.push({
      key: 'margin-' + unit, title: `Smallest distance of a ${kind} joint to its limit, ${unit}`, height: 120,
      series: [{name: 'margin', at: (row) => path.leastMargin(unit, row).margin}],
      bands: [{from: -Infinity, to: 0, name: 'beyond'}, {from: 0, to: asked, name: 'near'}],
      range: (low, high) => [Math.min(0, low * 1.1), Math.max(asked * 2, high * 1.05)],
      findings: (f) => f.code === 'joint-limit' || f.code === 'limit-margin',
      words: (row) => {
        const {margin, joint} = path.leastMargin(unit, row);
        return joint < 0 ? '' : `${amount(margin, unit)}, ${path.joints[joint].name}`;
      },
    });
  }
  specs.push({
    key: 'singular', title: 'Smallest singular value (σ min)', height: 120,
    series: [{name: 'σ min', at: (row) => path.singular[row]}],
    bands: [{from: -Infinity, to: settings.singular_below, name: 'near'}],
    range: (low, high) => [0, Math.max(settings.singular_below * 2, high * 1.05)],
    findings: (f) => f.code === 'singular-pass' || f.code === 'branch-flip',
    words: (row) => singular(path.singular[row]),
  });
  path.joints.forEach((joint, j) => specs.push(positionSpec(path, joint, j)));
  return specs;
}

function positionSpec(path, joint, j) {
  const bounded = joint.lower !== null;
  const margin = joint.unit === 'deg' ? report.settings.limit_margin_deg : report.settings.limit_margin_mm;
  const room = bounded ? 0.06 * (joint.upper - joint.lower) : 0;
  const words = bounded ? `${plain(joint.lower)} to ${plain(joint.upper)}` : 'without limits';
  return {
    key: 'position-' + joint.name, title: `${joint.name}, ${joint.unit} (${words})`, height: 105,
    series: [{joint: j, name: joint.name, at: (row) => path.positions[j][row]}],
    bands: bounded ? [
      {from: joint.upper, to: Infinity, name: 'beyond'}, {from: joint.upper - margin, to: joint.upper, name: 'near'},
      {from: -Infinity, to: joint.lower, name: 'beyond'}, {from: joint.lower, to: joint.lower + margin, name: 'near'},
    ] : [],
    range: (low, high) => bounded
      ? [Math.min(joint.lower - room, low - room), Math.max(joint.upper + room, high + room)]
      : [low - 0.05 * (high - low) - 1, high + 0.05 * (high - low) + 1],
    findings: (f) => f.joint === joint.name && (f.code === 'joint-limit' || f.code === 'limit-margin' || f.code === 'taught-mismatch'),
    words: (row) => amount(path.positions[j][row], joint.unit),
  };
}

class Chart {
  constructor(path, spec) {
    this.path = path;
    this.spec = spec;
    this.output = element('output');
    this.canvas = element('div', {class: 'canvas', style: `height:${spec.height}px`});
    this.line = element('div', {class: 'line', hidden: true});
    this.brush = element('div', {class: 'brush', hidden: true});
    this.plot = element('div', {class: 'plot', tabindex: '0', role: 'img', 'aria-label': this.summary()},
      this.canvas, this.line, this.brush);
    this.legend = spec.legend ? element('div', {class: 'legend', role: 'group', 'aria-label': 'Joints'}) : null;
    this.node = element('div', {class: 'chart', 'data-chart': spec.key},
      element('div', {class: 'chart-head'}, element('h3', {}, spec.title), this.output), this.legend, this.plot);
    this.own = path.findings.filter((f) => spec.findings(f) || f.code === 'out-of-reach' || f.code === 'joint-jump');
  }

  summary() {
    const [low, high] = this.dataRange(0, this.path.rows - 1);
    return `${this.spec.title}: from ${plain(low)} to ${plain(high)} over the path`;
  }

  values(row) {
    return this.spec.series.map((one) => {
      const value = one.at(row);
      return Number.isFinite(value) ? value : null;
    });
  }

  file() {
    const rows = [];
    for (let row = 0; row < this.path.rows; ++row) rows.push([this.path.x(row, state.domain), ...this.values(row)]);
    return rows;
  }

  dataRange(first, last) {
    let low = Infinity;
    let high = -Infinity;
    for (let row = first; row <= last; ++row) {
      for (const one of this.spec.series) {
        const value = one.at(row);
        if (value < low) low = value;
        if (value > high && Number.isFinite(value)) high = value;
      }
    }
    return low <= high ? [low, high] : [0, 0];
  }

  range() {
    const first = Math.max(0, this.path.rowAtX(state.window[0], state.domain) - 1);
    const last = Math.min(this.path.rows - 1, this.path.rowAtX(state.window[1], state.domain) + 1);
    return this.spec.range(...this.dataRange(first, last));
  }

  draw() {
    this.graph = new Dygraph(this.canvas, this.file(), {
      labels: ['x', ...this.spec.series.map((one) => one.name)],
      legend: 'never', showLabelsOnHighlight: false, interactionModel: {}, hideOverlayOnMouseOut: false,
      highlightCircleSize: 3, strokeWidth: 1.6, xRangePad: 0, rightGap: 8, digitsAfterDecimal: 3,
      connectSeparatedPoints: false, animatedZooms: false,
      dateWindow: state.window.slice(), valueRange: this.range(),
      axes: {
        x: {axisLabelFontSize: 12, axisLabelWidth: 70, pixelsPerLabel: 80, axisLabelFormatter: (value) => amount(value, state.domain === 'time' ? 's' : 'mm', 6)},
        y: {axisLabelFontSize: 12, axisLabelWidth: 46, pixelsPerLabel: 20, axisLabelFormatter: (value) => plain(value, 5)},
      },
      series: this.styles(), ...this.colours(),
      underlayCallback: (context, area, graph) => this.underlay(context, area, graph),
    });
    // The cursor follows the page's own state, not the library's nearest point.
    if (this.legend) this.fillLegend();
    this.cursor();
  }

  styles() {
    return Object.fromEntries(this.spec.series.map((one, i) => [one.name, this.spec.legend
      ? {color: seriesColour(i), strokePattern: seriesDash(i)} : {color: colour('s0')}]));
  }
  colours() { return {gridLineColor: colour('faint'), axisLineColor: colour('line')}; }

  fillLegend() {
    this.legendValues = this.spec.series.map(() => element('span'));
    this.only = null;
    this.legend.replaceChildren(...this.spec.series.map((one, i) => element('button', {
      type: 'button', 'aria-pressed': 'false', title: `Only ${one.name}`, click: () => this.isolate(i),
    }, svg('svg', {viewBox: '0 0 36 10', 'aria-hidden': 'true'}, svg('path', {
      d: 'M0 5h36', fill: 'none', style: `stroke:var(--s${i % 8})`, 'stroke-width': 2.5,
      'stroke-dasharray': (seriesDash(i) ?? []).join(' '),
    })), one.name, this.legendValues[i])));
  }

  isolate(i) {
    this.only = this.only === i ? null : i;
    this.spec.series.forEach((one, k) => this.graph.setVisibility(k, this.only === null || this.only === k));
    [...this.legend.children].forEach((button, k) => button.setAttribute('aria-pressed', String(this.only === k)));
  }

  // Bands, then the stretches that were found, hatched, then where segments begin.
  underlay(context, area, graph) {
    const [bottom, top] = graph.yAxisRange();
    const x = (value) => graph.toDomXCoord(value);
    context.save();
    context.beginPath();
    context.rect(area.x, area.y, area.w, area.h);
    context.clip();
    for (const band of this.spec.bands) {
      const from = graph.toDomYCoord(Math.max(band.from, bottom));
      const to = graph.toDomYCoord(Math.min(band.to, top));
      if (from <= to) continue;
      context.fillStyle = colour(band.name);
      context.fillRect(area.x, to, area.w, from - to);
      if (band.name === 'beyond') this.edge(context, area, band.from === -Infinity ? to : from);
    }
    for (const finding of this.own) {
      const {begin, end} = this.path.stretch(finding, state.domain);
      const left = x(begin);
      const right = Math.max(x(end), left + 2);
      if (right < area.x || left > area.x + area.w) continue;
      this.hatch(context, area, left, right, finding.level === 'error');
    }
    const begins = state.domain === 'time' ? this.path.beginTime : this.path.beginLength;
    const visible = Array.from(begins, x).filter((at) => at >= area.x && at <= area.x + area.w);
    context.fillStyle = colour('line');
    // So many that they'd be a grey wall say nothing.
    if (visible.length * 12 < area.w) visible.forEach((at) => context.fillRect(at, area.y, 1, area.h));
    context.restore();
  }

  edge(context, area, y) {
    context.strokeStyle = colour('bad');
    context.setLineDash([6, 3]);
    context.beginPath();
    context.moveTo(area.x, y);
    context.lineTo(area.x + area.w, y);
    context.stroke();
    context.setLineDash([]);
  }

  // Errors lean one way and are dense, warnings the other.
  hatch(context, area, left, right, isError) {
    context.save();
    context.beginPath();
    context.rect(left, area.y, right - left, area.h);
    context.clip();
    context.strokeStyle = colour(isError ? 'bad' : 'doubt');
    context.globalAlpha = 0.45;
    const lean = isError ? area.h : -area.h;
    const gap = isError ? 6 : 10;
    const first = Math.max(left, area.x) - area.h;
    const last = Math.min(right, area.x + area.w) + area.h;
    context.beginPath();
    for (let at = first - (first % gap); at < last; at += gap) {
      context.moveTo(at, area.y + area.h);
      context.lineTo(at + lean, area.y);
    }
    context.stroke();
    context.globalAlpha = 1;
    if (right - left < 4) context.fillRect(left, area.y, 2, area.h);
    context.restore();
  }

  cursor() {
    const row = state.row;
    if (this.spec.words) this.output.textContent = this.path.isKnown(row) ? this.spec.words(row) : 'out of reach';
    if (this.legendValues) {
      this.spec.series.forEach((one, i) => {
        const value = one.at(row);
        this.legendValues[i].textContent = Number.isFinite(value) ? ` ${plain(value < 1e-5 ? 0 : value, 3)} %` : this.path.isKnown(row) ? ' unbounded' : ' none';
      });
    }
    if (!this.graph) return;
    const x = this.path.x(row, state.domain);
    const visible = x >= state.window[0] && x <= state.window[1];
    this.line.hidden = !visible;
    if (!visible) { this.graph.clearSelection(); return; }
    this.graph.setSelection(row);
    const area = this.graph.getArea();
    Object.assign(this.line.style, {left: `${this.graph.toDomXCoord(x) - 1}px`, top: `${area.y}px`, height: `${area.h}px`});
  }

  window() {
    this.graph.updateOptions({dateWindow: state.window.slice(), valueRange: this.range()});
    this.cursor();
  }

  domain() { this.graph.updateOptions({file: this.file(), dateWindow: state.window.slice()}); }
  recolour() { this.graph.updateOptions({series: this.styles(), ...this.colours()}); }

  resize() {
    this.graph.resize();
    this.cursor();
  }
}
