// The path in space, wider and darker where a joint comes nearer to its speed limit, with the arm at the cursor. Drawn
// as vectors: it prints as sharp as the text, and needs no graphics card.

const speedClasses = [
  {upTo: 0.5, name: 'slow', width: 1.6, words: 'up to 50 % of the worst joint’s speed'},
  {upTo: null, name: 'brisk', width: 3, words: ''},
  {upTo: 1 + 1e-9, name: 'close', width: 5, words: ''},
  {upTo: Infinity, name: 'over', width: 8, words: 'above 100 %, or without bound'},
];
speedClasses[1].upTo = Math.max(0.5, report.settings.speed_margin);
speedClasses[1].words = `to ${plain(100 * speedClasses[1].upTo, 3)} %`;
speedClasses[2].words = 'to 100 %';
const mostWaypointNames = 30;
const mostMarkNames = 60;
const piecesAcross = 700;  // a piece of the path is about this part of its size

function classOf(ratio) {
  if (Number.isNaN(ratio)) return 3;
  return speedClasses.findIndex((one) => ratio <= one.upTo);
}

class View {
  constructor(box) {
    this.box = box;
    this.renderer = new THREE.SVGRenderer();
    this.renderer.setPrecision(1);
    this.camera = new THREE.PerspectiveCamera(32, 1.3, 1, 1e6);
    this.camera.up.set(0, 0, 1);
    this.turn = {around: -0.9, up: 0.45, distance: 1};
    box.append(this.renderer.domElement);
    this.renderer.domElement.setAttribute('aria-hidden', 'true');
    this.listen();
  }

  listen() {
    let from = null;
    this.box.addEventListener('pointerdown', (event) => {
      if (event.target.closest('.mark')) return;
      from = {x: event.clientX, y: event.clientY, ...this.turn};
      this.box.setPointerCapture(event.pointerId);
    });
    this.box.addEventListener('pointermove', (event) => {
      if (!from) return;
      this.look(from.around - (event.clientX - from.x) * 0.008, from.up + (event.clientY - from.y) * 0.008);
    });
    const end = () => { from = null; };
    this.box.addEventListener('pointerup', end);
    this.box.addEventListener('pointercancel', end);
    this.box.addEventListener('wheel', (event) => {
      // The wheel belongs to the page until the view has been chosen.
      if (document.activeElement !== this.box) return;
      event.preventDefault();
      this.nearer(event.deltaY > 0 ? 1.1 : 1 / 1.1);
    }, {passive: false});
    this.box.addEventListener('keydown', (event) => {
      const {around, up} = this.turn;
      const actions = {
        ArrowLeft: () => this.look(around - 0.1, up), ArrowRight: () => this.look(around + 0.1, up),
        ArrowUp: () => this.look(around, up + 0.1), ArrowDown: () => this.look(around, up - 0.1),
        '+': () => this.nearer(1 / 1.2), '=': () => this.nearer(1 / 1.2), '-': () => this.nearer(1.2), 0: () => this.from('all'),
      };
      if (event.ctrlKey || event.altKey || event.metaKey || !actions[event.key]) return;
      event.preventDefault();
      actions[event.key]();
    });
  }

  look(around, up) {
    this.turn.around = around;
    this.turn.up = Math.max(-1.55, Math.min(1.55, up));
    this.later();
  }

  nearer(factor) { this.frame(this.centre, Math.max(0.02, Math.min(6, this.turn.distance * factor))); }

  frame(centre, distance) {
    this.centre = centre;
    this.turn.distance = distance;
    this.later();
  }

  from(name) {
    const places = {askew: [-0.9, 0.45], front: [-Math.PI / 2, 0], side: [0, 0], top: [-Math.PI / 2, 1.55]};
    if (name === 'closer') this.nearer(1 / 1.25);
    else if (name === 'further') this.nearer(1.25);
    else if (name === 'path') this.frame(this.pathCentre ?? this.whole, Math.min(1, Math.max(0.02, this.pathSize / this.size)));
    else if (name === 'all') this.frame(this.whole, 1);
    else this.look(...places[name]);
  }

  show(path) {
    this.path = path;
    this.scene = new THREE.Scene();
    this.measure();
    this.addFloor();
    this.addPath();
    this.addWaypoints();
    this.addMarks();
    this.moving = new THREE.Group();
    this.scene.add(this.moving);
    this.addTcp();
    this.pose();
    this.resize();
  }

  // What has to be seen: the path, and the arm at some places of it.
  measure() {
    const box = new THREE.Box3();
    const path = this.path;
    for (let row = 0; row < path.rows; ++row) {
      if (path.isKnown(row)) box.expandByPoint(this.tcpAt(row));
    }
    const pathBox = box.clone();
    this.pathSize = box.isEmpty() ? 1 : Math.max(1, box.getSize(new THREE.Vector3()).length());
    for (let k = 0; k <= 8; ++k) {
      const arm = path.rows > 0 ? skeletonAt(path, Math.floor((path.rows - 1) * k / 8)) : null;
      if (arm) arm.points.forEach((p) => box.expandByPoint(new THREE.Vector3(...p)));
    }
    this.pathCentre = box.isEmpty() ? null : pathBox.getCenter(new THREE.Vector3());
    if (box.isEmpty()) box.expandByPoint(new THREE.Vector3());
    this.whole = box.getCenter(new THREE.Vector3());
    this.centre = this.whole.clone();
    this.size = Math.max(1, box.getSize(new THREE.Vector3()).length());
    this.floor = {box, height: path.arm.base[11]};
  }

  tcpAt(row) { return new THREE.Vector3(...this.path.tcp.subarray(3 * row, 3 * row + 3)); }

  line(points, name, width) {
    const material = new THREE.LineBasicMaterial({linewidth: width});
    material.name = name;
    material.color.set(colour(name));
    return new THREE.Line(new THREE.BufferGeometry().setFromPoints(points), material);
  }

  addFloor() {
    const {box, height} = this.floor;
    const decade = 10 ** Math.floor(Math.log10(this.size / 4));
    const step = this.size / 4 > 5 * decade ? 5 * decade : this.size / 4 > 2 * decade ? 2 * decade : decade;
    // A slim path shall not stand on a slim strip.
    const least = this.size / 4;
    const wide = box.clone().expandByVector(new THREE.Vector3(least, least, 0));
    const [x0, y0] = [wide.min.x, wide.min.y].map((v) => Math.floor(v / step) * step);
    const [x1, y1] = [wide.max.x, wide.max.y].map((v) => Math.ceil(v / step) * step);
    const at = (x, y) => new THREE.Vector3(x, y, height);
    for (let x = x0; x <= x1 + 1e-6; x += step) this.scene.add(this.line([at(x, y0), at(x, y1)], 'line', 1));
    for (let y = y0; y <= y1 + 1e-6; y += step) this.scene.add(this.line([at(x0, y), at(x1, y)], 'line', 1));
    this.gridStep = step;
    const base = new THREE.Vector3(...origin(this.path.arm.base));
    ['x', 'y', 'z'].forEach((name, axis) => {
      const tip = base.clone().setComponent(axis, base.getComponent(axis) + this.size * 0.12);
      this.scene.add(this.line([base, tip], 'soft', 1.5));
      this.add(this.scene, 'axis', tip, svg('text', {x: 4, y: 4}, name));
    });
  }

  add(group, kind, point, ...parts) {
    const node = svg('g', {class: kind}, ...parts);
    const object = new THREE.SVGObject(node);
    object.position.copy(point);
    group.add(object);
    return {node, object};
  }

  // Runs of one class as one line each; the worst ratio of the rows that a piece spans decides its class.
  addPath() {
    const path = this.path;
    const least = this.pathSize / piecesAcross;
    let run = [];
    let runClass = -1;
    const finish = () => {
      if (run.length > 1) this.scene.add(this.line(run, speedClasses[runClass].name, speedClasses[runClass].width));
      run = [];
    };
    for (let row = 0; row < path.rows; ++row) {
      if (!path.isKnown(row)) { finish(); continue; }
      const here = this.tcpAt(row);
      const now = classOf(path.worst[row]);
      if (run.length > 0 && now !== runClass) {
        // The piece between belongs to the worse of its ends.
        if (runClass > now) { run.push(here); finish(); run = [here]; } else { const last = run[run.length - 1]; finish(); run = [last, here]; }
      } else if (run.length < 2 || run[run.length - 2].distanceTo(here) >= least) {
        run.push(here);
      } else {
        run[run.length - 1] = here;
      }
      runClass = now;
    }
    finish();
  }

  addWaypoints() {
    const path = this.path;
    const count = path.segmentCount + 1;
    if (count > 400) return;
    for (let i = 0; i < count; ++i) {
      const [x, y, z] = path.waypoints.subarray(3 * i, 3 * i + 3);
      if (Number.isNaN(x)) continue;
      const id = i === 0 ? path.segments.from[0] : path.segments.to[i - 1];
      const name = count <= mostWaypointNames ? [svg('text', {x: 6, y: -5}, id)] : [];
      this.add(this.scene, 'waypoint', new THREE.Vector3(x, y, z), svg('circle', {r: 3}), ...name);
    }
  }

  addMarks() {
    this.marks = this.path.findings.map((finding) => {
      const row = this.path.rowAt(finding.segment, finding.peak);
      const known = this.path.isKnown(row) ? row : Math.max(0, row - 1);
      if (!this.path.isKnown(known)) return null;
      const name = this.path.findings.length <= mostMarkNames ? [svg('text', {x: 8, y: 16}, String(finding.index + 1))] : [];
      const {node} = this.add(this.scene, `mark ${finding.level}`, this.tcpAt(known),
        svg('title', {}, `${finding.index + 1}: ${finding.code}`), svg('path', {d: 'M0 2l7 12h-14z'}), ...name);
      node.addEventListener('click', () => showFinding(finding.index));
      return node;
    });
  }

  addTcp() {
    this.tcp = this.add(this.scene, 'tcp', this.centre, svg('circle', {r: 8}),
      svg('path', {d: 'M-13 0h7M6 0h7M0 -13v7M0 6v7'}));
  }

  // The arm at the cursor.
  pose() {
    if (!this.scene) return;
    const arm = this.path.rows > 0 ? skeletonAt(this.path, state.row) : null;
    this.moving.children.forEach((child) => child.geometry && child.geometry.dispose());
    this.moving.remove(...this.moving.children.slice());
    this.arm = arm;
    if (!arm) return;
    const points = arm.points.map((p) => new THREE.Vector3(...p));
    for (let i = 0; i + 1 < points.length; ++i) {
      // Cut, so that the painter's order of near and far comes out right.
      const cuts = 6;
      const way = [];
      for (let k = 0; k <= cuts; ++k) way.push(points[i].clone().lerp(points[i + 1], k / cuts));
      this.moving.add(this.line(way, 'arm', i + 2 === points.length ? 3 : 7));
    }
    arm.joints.forEach((p) => this.add(this.moving, 'joint', new THREE.Vector3(...p), svg('circle', {r: 4.5})));
    this.tcp.object.position.copy(points[points.length - 1]);
    this.later();
  }

  current() {
    this.marks.forEach((node, i) => node && node.classList.toggle('current', i === state.finding));
    this.later();
  }

  recolour() {
    this.scene.traverse((object) => object.material && object.material.name && object.material.color.set(colour(object.material.name)));
    this.later();
  }

  resize() {
    const width = Math.max(200, this.box.clientWidth);
    const height = Math.round(Math.min(width * 0.8, 520));
    this.renderer.setSize(width, height);
    this.camera.aspect = width / height;
    this.camera.updateProjectionMatrix();
    this.render();
  }

  later() {
    if (this.waiting) return;
    this.waiting = true;
    requestAnimationFrame(() => { this.waiting = false; this.render(); });
  }

  render() {
    const {around, up, distance} = this.turn;
    const far = this.size * 0.5 / Math.tan(this.camera.fov * Math.PI / 360) * distance * Math.max(1, 1.15 / this.camera.aspect);
    this.camera.position.set(Math.cos(up) * Math.cos(around), Math.cos(up) * Math.sin(around), Math.sin(up))
      .multiplyScalar(far).add(this.centre);
    this.camera.near = far / 1000;
    this.camera.far = far + this.size * 4;
    this.camera.updateProjectionMatrix();
    this.camera.lookAt(this.centre);
    this.renderer.setClearColor(colour('sheet'));
    this.renderer.render(this.scene, this.camera);
  }
}

function fillKey(view) {
  const swatch = (one) => svg('svg', {viewBox: '0 0 32 12', 'aria-hidden': 'true'},
    svg('path', {d: 'M0 6h32', style: `stroke:var(--${one.name})`, 'stroke-width': one.width}));
  byId('key').replaceChildren(...speedClasses.map((one) => element('span', {}, swatch(one), one.words)),
    element('span', {class: 'soft'}, `grid ${plain(view.gridStep)} mm; triangles: findings, filled where an error`));
}

let view = null;
on('path', () => {
  view ??= new View(byId('view'));
  view.show(current());
  fillKey(view);
});
on('cursor', () => view.pose());
on('finding', () => view.current());
on('colours', () => view.recolour());
