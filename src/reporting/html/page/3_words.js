// Small pieces of the page: elements, numbers, signs.

const svgSpace = 'http://www.w3.org/2000/svg';

function element(name, attributes = {}, ...children) {
  const node = document.createElement(name);
  for (const [key, value] of Object.entries(attributes)) {
    if (key === 'click') node.addEventListener('click', value);
    else if (value !== null && value !== undefined && value !== false) node.setAttribute(key, value === true ? '' : value);
  }
  node.append(...children.filter((child) => child !== null && child !== undefined));
  return node;
}

function svg(name, attributes = {}, ...children) {
  const node = document.createElementNS(svgSpace, name);
  for (const [key, value] of Object.entries(attributes)) node.setAttribute(key, value);
  node.append(...children);
  return node;
}

const byId = (id) => document.getElementById(id);
const colour = (name) => getComputedStyle(document.documentElement).getPropertyValue('--' + name).trim();

// About `digits` significant digits; whole numbers keep all theirs.
function plain(value, digits = 4) {
  if (value === null || value === undefined) return '';
  if (Number.isNaN(value)) return 'none';
  if (!Number.isFinite(value)) return value > 0 ? 'unbounded' : 'none';
  if (Math.abs(value) >= 10 ** digits) return String(Math.round(value)).replace('-', '−');
  const short = Number(value.toPrecision(digits));
  return (Math.abs(short) < 1e-4 && short !== 0 ? short.toExponential(2) : String(short)).replace('-', '−');
}
const amount = (value, unit, digits) => unit ? `${plain(value, digits)} ${unit}` : plain(value, digits);
// Below this a singular value is rounding.
const singular = (value, digits) => plain(value !== null && Math.abs(value) < 1e-12 ? 0 : value, digits);
const percent = (share) => Number.isFinite(share) ? `${plain(100 * share, 3)} %` : plain(share);
const counted = (count, word) => `${count} ${word}${count === 1 ? '' : 's'}`;

// Each level has its own shape: an octagon, a triangle, a ring with a tick.
const shapes = {
  error: 'M7 1h10l6 6v10l-6 6H7l-6-6V7zM8 8l8 8m0-8l-8 8',
  warning: 'M12 2l11 20H1zM12 9v6m0 2.5v1.5',
  clear: 'M12 1a11 11 0 1 0 .01 0zM6.5 12.5l4 4 7-8',
};
function sign(level) {
  return svg('svg', {viewBox: '0 0 24 24', 'aria-hidden': 'true'},
    svg('path', {d: shapes[level], fill: 'none', stroke: 'currentColor', 'stroke-width': 2, 'stroke-linejoin': 'round'}));
}
const tag = (level, words) => element('span', {class: 'tag ' + level}, sign(level), words);

function between(begin, end, unit) {
  const [first, last] = [plain(begin), plain(end)];
  return first === last ? `at ${first} ${unit}` : `${first} to ${last} ${unit}`;
}

// The value against what it is held to, as the report has it.
function valueAndLimit(finding) {
  if (finding.code === 'joint-jump' || finding.code === 'branch-flip' || finding.code === 'unproven') return '';
  if (finding.code === 'singular-pass') return `${singular(finding.value)} (${plain(finding.limit)})`;
  const value = finding.value === null && 'ratio' in finding ? 'unbounded' : amount(finding.value, finding.unit);
  return finding.limit === null ? value : `${value} (${amount(finding.limit, finding.unit)})`;
}
