// The table of findings: one list a path, sorted by any column, each row the way to its place.

const sorts = {
  number: (f) => f.index,
  level: (f) => (f.level === 'error' ? 0 : 1),
  what: (f) => f.code,
  joint: (f) => f.joint ?? '',
  where: (f) => f.segment + f.begin,
  value: (f) => (f.value === null ? ('ratio' in f ? Infinity : -1) : f.ratio ?? Math.abs(f.value)),
};
const columns = [
  ['number', 'No.'], ['level', 'Level'], ['what', 'What'], ['joint', 'Joint'], ['where', 'Where'],
  ['value', 'Value (limit)'], [null, 'In words, and what helps'],
];

class FindingList {
  constructor(path) {
    this.path = path;
    this.rows = path.findings.map((finding) => this.row(finding));
    this.shown = {text: '', level: ''};
    this.body = element('tbody', {}, ...this.rows);
    this.heads = columns.map(([key, title]) => key
      ? element('th', {scope: 'col', class: 'sorts', 'data-key': key},
        element('button', {type: 'button', click: () => this.sort(key)}, title))
      : element('th', {scope: 'col', class: 'words'}, title));
    this.count = element('span', {class: 'soft', role: 'status'});
    this.node = element('div', {class: 'list'},
      element('h3', {class: 'list-title'}, path.given.name || path.given.file), this.filters(),
      element('div', {class: 'scroll', tabindex: '0', role: 'region', 'aria-label': 'Findings'},
        element('table', {class: 'cards'}, element('thead', {}, element('tr', {}, ...this.heads)), this.body)));
    this.sort('number', 'ascending');
    this.filter();
  }

  row(f) {
    const path = this.path;
    const lead = element('button', {type: 'button', class: 'lead', 'aria-label': `Finding ${f.index + 1}: show its place`},
      String(f.index + 1));
    const length = path.segments.length_mm[f.segment - 1] > 0
      ? [element('br'), between(f.begin_mm, f.end_mm, 'mm')] : [];
    const level = f.accepted ? tag('clear', `${f.level}, accepted`) : tag(f.level, f.level);
    return element('tr', {class: f.accepted ? 'leads accepted' : 'leads', click: () => leadTo(f.index), 'data-index': f.index},
      element('td', {}, lead),
      element('td', {}, level),
      element('td', {}, element('code', {}, f.code)),
      element('td', f.joint ? {'data-label': 'Joint'} : {}, f.joint ?? ''),
      element('td', {}, `${f.from} → ${f.to}, line ${f.line}`, element('br'),
        element('span', {class: 'way'}, between(100 * f.begin, 100 * f.end, '%'), ...length)),
      element('td', {'data-label': 'Value (limit)'}, valueAndLimit(f)),
      element('td', {}, element('p', {}, f.message), element('p', {class: 'soft'}, f.remedy)));
  }

  filters() {
    if (this.rows.length < 8) return null;
    const text = element('input', {type: 'search', size: '18'});
    text.addEventListener('input', () => { this.shown.text = text.value.toLowerCase(); this.filter(); });
    const level = element('select', {}, element('option', {value: ''}, 'all levels'),
      element('option', {value: 'error'}, 'errors'), element('option', {value: 'warning'}, 'warnings'));
    level.addEventListener('change', () => { this.shown.level = level.value; this.filter(); });
    return element('div', {class: 'filters'}, element('label', {}, 'Search', text),
      element('label', {}, 'Level', level), this.count);
  }

  filter() {
    let visible = 0;
    for (const row of this.rows) {
      const finding = this.path.findings[Number(row.dataset.index)];
      const fits = (!this.shown.level || finding.level === this.shown.level) &&
          (!this.shown.text || row.textContent.toLowerCase().includes(this.shown.text));
      row.hidden = !fits;
      if (fits) ++visible;
    }
    this.count.textContent = `${visible} of ${this.rows.length}`;
  }

  sort(key, wanted) {
    const head = this.heads.find((th) => th.dataset.key === key);
    // Values start with the worst.
    const [first, second] = key === 'value' ? ['descending', 'ascending'] : ['ascending', 'descending'];
    const way = wanted ?? (head.getAttribute('aria-sort') === first ? second : first);
    this.heads.forEach((th) => th.dataset.key && th.setAttribute('aria-sort', 'none'));
    head.setAttribute('aria-sort', way);
    const value = (row) => sorts[key](this.path.findings[Number(row.dataset.index)]);
    const order = (a, b) => (a < b ? -1 : a > b ? 1 : 0);
    const side = way === 'ascending' ? 1 : -1;
    this.rows.sort((a, b) => side * order(value(a), value(b)) || order(Number(a.dataset.index), Number(b.dataset.index)));
    this.body.append(...this.rows);
  }

  mark(index) {
    for (const row of this.rows) {
      const here = Number(row.dataset.index) === index;
      if (here) row.setAttribute('aria-current', 'true'); else row.removeAttribute('aria-current');
    }
  }
}

function leadTo(index) {
  showFinding(index);
  byId('along').scrollIntoView({block: 'start'});
}

const lists = new Map();
function listOf(index) {
  if (!lists.has(index)) {
    const path = pathData(index);
    const list = path.findings.length > 0 ? new FindingList(path) : {
      mark() {},
      node: element('div', {class: 'list'}, element('h3', {class: 'list-title'}, path.given.name || path.given.file),
        element('p', {}, 'Nothing was found on this path: every joint stays inside its limits and speeds, ' +
          'nothing singular, no jump.')),
    };
    list.node.querySelector('.list-title').hidden = report.paths.length === 1;
    lists.set(index, list);
    byId('lists').append(list.node);
  }
  return lists.get(index);
}

function showList() {
  listOf(state.path);
  lists.forEach((list, index) => { list.node.hidden = index !== state.path; });
}

on('path', showList);
on('finding', () => {
  const path = current();
  listOf(state.path).mark(state.finding);
  const finding = state.finding === null ? null : path.findings[state.finding];
  byId('current').replaceChildren(...(finding
    ? [tag(finding.level, `${finding.index + 1} of ${path.findings.length}: ${finding.code}`), ` ${finding.message}`] : []));
  byId('previous').disabled = byId('next').disabled = path.findings.length === 0;
});
