// The arm's forward map: where each link begins and ends for given joints. A placement is a 3x4 matrix, row by row.

function compose(a, b) {
  const out = new Array(12);
  for (let i = 0; i < 12; i += 4) {
    for (let k = 0; k < 4; ++k) {
      out[i + k] = a[i] * b[k] + a[i + 1] * b[4 + k] + a[i + 2] * b[8 + k] + (k === 3 ? a[i + 3] : 0);
    }
  }
  return out;
}

const origin = (placement) => [placement[3], placement[7], placement[11]];

function motion(turns, value) {
  if (!turns) return [1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1, value];
  const [c, s] = [Math.cos(value * Math.PI / 180), Math.sin(value * Math.PI / 180)];
  return [c, -s, 0, 0, s, c, 0, 0, 0, 0, 1, 0];
}

// Points of the arm from its base to the TCP, those where a joint is, and the TCP's placement.
function skeleton(arm, values, tool) {
  let at = arm.base;
  const points = [origin(at)];
  const joints = [];
  arm.joints.forEach((joint, j) => {
    at = compose(at, joint.before);
    points.push(origin(at));
    joints.push(origin(at));
    at = compose(compose(at, motion(joint.turns, values[j])), joint.after);
    points.push(origin(at));
  });
  at = compose(at, arm.flange);
  points.push(origin(at));
  at = compose(at, arm.tools[tool]);
  points.push(origin(at));
  const apart = (p, q) => Math.hypot(p[0] - q[0], p[1] - q[1], p[2] - q[2]) > 1e-6;
  return {points: points.filter((p, i) => i === 0 || apart(p, points[i - 1])), joints, tcp: at};
}

// The skeleton at a row; out of reach it stays at the last configuration before.
function skeletonAt(path, row) {
  let known = row;
  while (known > 0 && !path.isKnown(known)) --known;
  if (!path.isKnown(known)) return null;
  const values = path.arm.joints.map((joint, j) => path.positions[j][known]);
  return skeleton(path.arm, values, path.arm.tool_of_segment[path.segment[known] - 1]);
}
