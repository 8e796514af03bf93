'use strict';
// The report's data, and a path's curves made ready for drawing. Units: mm, deg, s; speeds as shares of their limits.

const report = JSON.parse(document.getElementById('data').textContent);

function numbers(text, Kind) {
  const bytes = Uint8Array.from(atob(text), (letter) => letter.charCodeAt(0));
  return new Kind(bytes.buffer);
}

class PathData {
  constructor(index) {
    const given = report.paths[index];
    const curves = given.curves;
    const single = (text) => numbers(text, Float32Array);
    Object.assign(this, {index, given, rows: curves.rows, joints: given.joints, findings: given.findings});
    this.segment = single(curves.segment);
    this.fraction = single(curves.fraction);
    this.time = numbers(curves.time, Float64Array);
    this.length = numbers(curves.length, Float64Array);
    this.positions = curves.positions.map(single);
    this.speeds = curves.speeds.map(single);
    this.singular = single(curves.singular);
    this.tcp = single(curves.tcp);
    this.waypoints = single(curves.waypoints);
    this.arm = curves.arm;
    this.armJoints = curves.arm.joints.length;
    this.segments = given.segments.index ? given.segments : {index: [], from: [], to: [], line: []};
    this.segmentCount = this.segments.index.length;
    this.fillTotals();
    this.worst = new Float32Array(this.rows);
    for (let row = 0; row < this.rows; ++row) this.worst[row] = this.worstAt(row).ratio;
  }

  // Time and length at the begin of each segment; the dwell belongs to the segment that it follows.
  fillTotals() {
    this.beginTime = new Float64Array(this.segmentCount + 1);
    this.beginLength = new Float64Array(this.segmentCount + 1);
    for (let i = 0; i < this.segmentCount; ++i) {
      this.beginTime[i + 1] = this.beginTime[i] + this.segments.duration_s[i] + this.segments.dwell_s[i];
      this.beginLength[i + 1] = this.beginLength[i] + this.segments.length_mm[i];
    }
  }

  isKnown(row) { return !Number.isNaN(this.positions[0][row]); }

  // The joint that needs the greatest share of its speed; NaN where the pose is out of reach or the rate has no bound.
  worstAt(row) {
    let joint = -1;
    let ratio = Number.NaN;
    for (let j = 0; j < this.speeds.length; ++j) {
      const share = Math.abs(this.speeds[j][row]);
      if (Number.isNaN(share)) continue;
      if (!(ratio >= share)) { ratio = share; joint = j; }
    }
    return {joint, ratio};
  }

  // How far a joint is from its nearer limit, negative beyond it; Infinity without limits.
  margin(joint, row) {
    const {lower, upper} = this.joints[joint];
    if (lower === null) return Infinity;
    const at = this.positions[joint][row];
    return Math.min(at - lower, upper - at);
  }

  // The smallest of these among the joints of one unit.
  leastMargin(unit, row) {
    let least = Infinity;
    let joint = -1;
    for (let j = 0; j < this.joints.length; ++j) {
      if (this.joints[j].unit !== unit) continue;
      const margin = this.margin(j, row);
      if (margin < least) { least = margin; joint = j; }
    }
    return {margin: joint < 0 ? Number.NaN : least, joint};
  }

  // The row nearest to a place on a segment.
  rowAt(segment, fraction) {
    let low = 0;
    let high = this.rows;
    while (low < high) {
      const middle = (low + high) >> 1;
      const before = this.segment[middle] < segment ||
          (this.segment[middle] === segment && this.fraction[middle] < fraction);
      if (before) low = middle + 1; else high = middle;
    }
    const off = (row) => row < 0 || row >= this.rows || this.segment[row] !== segment
      ? Infinity : Math.abs(this.fraction[row] - fraction);
    const best = off(low - 1) < off(low) ? low - 1 : low;
    return Math.max(0, Math.min(this.rows - 1, best));
  }

  x(row, domain) { return domain === 'time' ? this.time[row] : this.length[row]; }

  // The row nearest to a place on the charts' axis.
  rowAtX(x, domain) {
    const values = domain === 'time' ? this.time : this.length;
    let low = 0;
    let high = this.rows;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (values[middle] < x) low = middle + 1; else high = middle;
    }
    if (low > 0 && (low === this.rows || x - values[low - 1] < values[low] - x)) --low;
    return Math.max(0, low);
  }

  // Begin, end and peak of a finding on the charts' axis.
  stretch(finding, domain) {
    const i = finding.segment - 1;
    const [start, tail] = domain === 'time' ? [this.beginTime[i], '_s'] : [this.beginLength[i], '_mm'];
    return {begin: start + finding['begin' + tail], end: start + finding['end' + tail], peak: start + finding['peak' + tail]};
  }

  extent(domain) {
    if (this.rows === 0) return [0, 1];
    const end = this.x(this.rows - 1, domain);
    return [0, end > 0 ? end : 1];
  }
}

const pathCache = new Map();
function pathData(index) {
  if (!pathCache.has(index)) pathCache.set(index, new PathData(index));
  return pathCache.get(index);
}
