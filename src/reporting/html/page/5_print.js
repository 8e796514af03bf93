// The charts once more as vectors, for paper: whole path or the stretch on the screen, black line patterns and all.

const paper = {width: 680, left: 52, right: 8, top: 4, bottom: 18};

// Round numbers between two values, about `count` of them.
function ticks(from, to, count) {
  const rough = (to - from) / count;
  if (!(rough > 0)) return [];
  const decade = 10 ** Math.floor(Math.log10(rough));
  const step = [1, 2, 5, 10].map((k) => k * decade).find((k) => k >= rough);
  const out = [];
  for (let k = Math.ceil(from / step); k * step <= to + step * 1e-9; ++k) out.push(k * step);
  return out;
}

class PaperChart {
  constructor(chart) {
    this.chart = chart;
    this.path = chart.path;
    this.height = chart.spec.height;
    [this.low, this.high] = chart.range();
    [this.from, this.to] = state.window;
  }

  x(value) { return paper.left + (value - this.from) / (this.to - this.from) * (paper.width - paper.left - paper.right); }
  y(value) {
    const share = (value - this.low) / (this.high - this.low);
    return paper.top + (1 - Math.max(-1, Math.min(2, share))) * (this.height - paper.top - paper.bottom);
  }

  // One series; what falls on one dot of the paper is drawn by its least and greatest value.
  line(series) {
    const first = Math.max(0, this.path.rowAtX(this.from, state.domain) - 1);
    const last = Math.min(this.path.rows - 1, this.path.rowAtX(this.to, state.domain) + 1);
    let d = '';
    let pen = false;
    let column = null;
    const put = (x, value) => { d += `${pen ? 'L' : 'M'}${x.toFixed(1)} ${this.y(value).toFixed(1)}`; pen = true; };
    const flush = () => {
      if (!column) return;
      const inside = column.low !== column.first || column.high !== column.first;
      put(column.x, column.first);
      if (inside) { put(column.x, column.low); put(column.x, column.high); put(column.x, column.last); }
      column = null;
    };
    for (let row = first; row <= last; ++row) {
      const value = series.at(row);
      if (!Number.isFinite(value)) { flush(); pen = false; continue; }
      const x = this.x(this.path.x(row, state.domain));
      if (column && x - column.x < 0.4) {
        column.low = Math.min(column.low, value);
        column.high = Math.max(column.high, value);
        column.last = value;
      } else {
        flush();
        column = {x, first: value, last: value, low: value, high: value};
      }
    }
    flush();
    return d;
  }

  box(from, to, attributes) {
    const [top, bottom] = [this.y(Math.min(to, this.high)), this.y(Math.max(from, this.low))];
    return svg('rect', {x: paper.left, y: top, width: paper.width - paper.left - paper.right, height: Math.max(0, bottom - top), ...attributes});
  }

  stretches() {
    return this.chart.own.map((finding) => {
      const {begin, end} = this.path.stretch(finding, state.domain);
      const left = Math.max(this.x(begin), paper.left);
      const right = Math.min(Math.max(this.x(end), left + 1.5), paper.width - paper.right);
      return left < right ? svg('rect', {x: left, y: paper.top, width: right - left, height: this.height - paper.top - paper.bottom,
        fill: `url(#hatch-${finding.level})`}) : '';
    });
  }

  scales() {
    const unit = state.domain === 'time' ? 's' : 'mm';
    const bottom = this.height - paper.bottom;
    return [
      ...ticks(this.from, this.to, 8).map((value) => svg('text', {x: this.x(value), y: bottom + 13, 'text-anchor': 'middle'}, amount(value, unit, 6))),
      ...ticks(this.low, this.high, this.height / 35).flatMap((value) => [
        svg('text', {x: paper.left - 5, y: this.y(value) + 4, 'text-anchor': 'end'}, plain(value, 5)),
        svg('path', {d: `M${paper.left} ${this.y(value)}H${paper.width - paper.right}`, class: 'rule'})]),
    ];
  }

  draw() {
    const spec = this.chart.spec;
    const series = spec.series.map((one, i) => svg('path', {d: this.line(one), fill: 'none', 'stroke-width': 1.3,
      style: `stroke:var(--s${spec.legend ? i % 8 : 0})`, 'stroke-dasharray': spec.legend ? (seriesDash(i) ?? []).join(' ') : ''}));
    const clip = `clip-${spec.key.replace(/\W/g, '-')}`;
    const frame = {x: paper.left, y: paper.top, width: paper.width - paper.left - paper.right, height: this.height - paper.top - paper.bottom};
    return svg('svg', {class: 'paper', viewBox: `0 0 ${paper.width} ${this.height}`, 'aria-hidden': 'true'},
      svg('clipPath', {id: clip}, svg('rect', frame)),
      ...spec.bands.filter((band) => band.to > this.low && band.from < this.high)
        .map((band) => this.box(band.from, band.to, {style: `fill:var(--${band.name})`})),
      ...this.scales(), ...this.stretches(), svg('g', {'clip-path': `url(#${clip})`}, ...series),
      svg('rect', {...frame, class: 'frame'}));
  }
}

function hatchPatterns() {
  const pattern = (level, name, lean) => svg('pattern', {id: `hatch-${level}`, width: 6, height: 6, patternUnits: 'userSpaceOnUse',
    patternTransform: `rotate(${lean})`}, svg('path', {d: 'M0 0v6', style: `stroke:var(--${name})`, 'stroke-width': 1, opacity: 0.6}));
  return svg('svg', {class: 'paper', width: 0, height: 0, 'aria-hidden': 'true'}, pattern('error', 'bad', 35), pattern('warning', 'doubt', -35));
}

function drawOnPaper() {
  byId('charts').append(hatchPatterns());
  charts.forEach((chart) => chart.node.append(new PaperChart(chart).draw()));
}
function clearPaper() { document.querySelectorAll('.paper').forEach((node) => node.remove()); }
