#include "random_case.hpp"

#include <Eigen/LU>
#include <Eigen/SVD>
#include <cmath>

namespace pathvet::test {
namespace {

constexpr double right = pi / 2;

Link link(double theta, double d, double a, double alpha, JointType type = JointType::revolute) {
  Link out;
  out.theta = theta;
  out.d = d;
  out.a = a;
  out.alpha = alpha;
  out.type = type;
  return out;
}

LinkArm links_of(Random& random, ArmKind kind) {
  LinkArm arm;
  const auto side = [&] { return random.chance(0.5) ? right : -right; };
  const auto long_link = [&] { return random.uniform(250, 700); };
  const auto offset = [&] { return random.chance(0.5) ? random.uniform(-150, 150) : 0.0; };
  const double shoulder = side();
  switch (kind) {
    case ArmKind::spherical_wrist: {
      const double elbow = side();
      const double wrist = side();
      arm.links = {link(0, random.uniform(200, 500), offset(), shoulder),
                   link(0, offset(), long_link(), 0),
                   link(0, offset(), offset(), elbow),
                   link(0, long_link(), 0, wrist),
                   link(0, 0, 0, -wrist),
                   link(0, random.uniform(50, 150), 0, 0)};
      break;
    }
    case ArmKind::three_parallel: {
      const double wrist = side();
      arm.links = {link(0, random.uniform(80, 200), 0, shoulder),
                   link(0, 0, long_link(), 0),
                   link(0, 0, long_link(), 0),
                   link(0, random.uniform(60, 150), 0, wrist),
                   link(0, random.uniform(60, 150), 0, -wrist),
                   link(0, random.uniform(50, 150), 0, 0)};
      break;
    }
    case ArmKind::general_six:
      for (int i = 0; i < 6; ++i) {
        const double twist = random.chance(0.5) ? side() : random.uniform(-pi, pi);
        arm.links.push_back(link(random.uniform(-pi, pi), random.uniform(-200, 200),
                                 i == 1 || i == 2 ? long_link() : random.uniform(-150, 150), twist));
      }
      break;
    case ArmKind::level_four:
      arm.links = {link(0, random.uniform(200, 400), long_link(), 0), link(0, 0, long_link(), pi),
                   link(0, random.uniform(-50, 50), 0, 0, JointType::prismatic), link(0, 50, 0, 0)};
      break;
    case ArmKind::position_three:
      arm.links = {link(0, random.uniform(200, 400), offset(), shoulder), link(0, offset(), long_link(), 0),
                   link(0, 0, long_link(), 0)};
      break;
    case ArmKind::axis_five:
      arm.links = {link(0, random.uniform(200, 400), offset(), shoulder), link(0, offset(), long_link(), 0),
                   link(0, 0, long_link(), 0), link(right, 0, 0, right),
                   link(0, random.uniform(80, 150), 0, 0)};
      break;
    case ArmKind::sliding_six: {
      const double wrist = side();
      arm.links = {link(0, random.uniform(200, 400), offset(), shoulder),
                   link(0, random.uniform(100, 250), offset(), -shoulder),
                   link(0, random.uniform(200, 400), 0, 0, JointType::prismatic),
                   link(0, offset(), 0, wrist),
                   link(0, 0, 0, -wrist),
                   link(0, random.uniform(50, 150), 0, 0)};
      break;
    }
  }
  arm.base = random_pose(random, 800);
  if (random.chance(0.3)) arm.flange = random_pose(random, 100);
  return arm;
}

Column random_configuration(Random& random, const LinkArm& arm) {
  Column q(static_cast<Eigen::Index>(arm.links.size()));
  for (std::size_t i = 0; i < arm.links.size(); ++i) {
    q[static_cast<Eigen::Index>(i)] =
        arm.links[i].type == JointType::revolute ? random.uniform(-2.8, 2.8) : random.uniform(-150, 150);
  }
  return q;
}

Orientation orientation_of(ArmKind kind) {
  if (kind == ArmKind::position_three) return Orientation::free;
  return kind == ArmKind::axis_five ? Orientation::axis : Orientation::full;
}

double log_uniform(Random& random, double low, double high) {
  return std::exp(random.uniform(std::log(low), std::log(high)));
}

Cell cell_of(Random& random, const LinkArm& links) {
  Cell cell;
  cell.name = "random cell";
  cell.arm = to_arm(links);
  cell.arm.name = "random arm";
  double reach = 0;
  for (std::size_t i = 0; i < links.links.size(); ++i) {
    Joint& joint = cell.arm.joints[i];
    joint.name = "J" + std::to_string(i + 1);
    reach += 0.5 * std::hypot(links.links[i].a, links.links[i].d);
  }
  cell.arm.characteristic_length = reach;
  for (int i = 0; i < 2; ++i) cell.tools.push_back({"tool " + std::to_string(i), random_pose(random, 250)});
  for (int i = 0; i < 2; ++i)
    cell.frames.push_back({"frame " + std::to_string(i), random_pose(random, 1000), {}});
  return cell;
}

/// Limits round a configuration, near enough that paths cross them now and then; speeds likewise.
void set_limits(Random& random, Cell& cell, const Column& q, double rate) {
  for (int i = 0; i < cell.arm.joint_count(); ++i) {
    Joint& joint = cell.arm.joints[static_cast<std::size_t>(i)];
    const bool turns = joint.type == JointType::revolute;
    const double room = turns ? 1.0 : 200.0;
    joint.lower = q[i] - room * log_uniform(random, 0.02, 4);
    joint.upper = q[i] + room * log_uniform(random, 0.1, 4);
    if (turns && random.chance(0.1)) {
      joint.continuous = true;
      joint.lower = -std::numeric_limits<double>::infinity();
      joint.upper = -joint.lower;
    }
    joint.speed = (turns ? 1.0 : 300.0) * rate * log_uniform(random, 0.2, 8);
  }
  if (cell.arm.joint_count() >= 5 && random.chance(0.3) && cell.arm.joints[2].type == JointType::revolute) {
    CombinedLimit limit;
    limit.name = "J2+J3";
    limit.terms = {{1, 1.0}, {2, random.chance(0.5) ? 1.0 : -0.5}};
    const double now = limit.terms[0].factor * q[1] + limit.terms[1].factor * q[2];
    limit.lower = now - log_uniform(random, 0.05, 4);
    limit.upper = now + log_uniform(random, 0.05, 4);
    limit.speed = rate * log_uniform(random, 0.3, 8);
    cell.arm.combined_limits.push_back(limit);
  }
}

Waypoint waypoint(const Cell& cell, int index, int tool, std::optional<int> frame, Orientation orientation) {
  Waypoint w;
  w.id = "W" + std::to_string(index);
  w.move = index == 0 ? Move::start : Move::linear;
  w.tool = tool;
  w.frame = frame;
  w.orientation = orientation;
  w.place = {index + 2, 3};
  (void)cell;
  return w;
}

Pose tool_pose(const Cell& cell, int tool) {
  return cell.tools[static_cast<std::size_t>(tool)].placement;
}

/// A pose that the arm reaches, a little way off `from`: for full six joints anything, else by the joints.
Pose displaced(Random& random, ArmKind kind, const Pose& from, double length, double turn, const Pose& base) {
  Pose out = from;
  if (kind == ArmKind::level_four) {
    const Vector3 up = base.rotation.col(2);
    out.position += length * random_direction(random);
    out.rotation = Eigen::AngleAxisd(turn, up).toRotationMatrix() * from.rotation;
    return out;
  }
  out.position += length * random_direction(random);
  out.rotation = rotation_from_vector(turn * random_direction(random)) * from.rotation;
  return out;
}

void finish_path(Random& random, RandomCase& c, ArmKind kind, const Column& start,
                 const std::vector<Pose>& ends, const std::vector<int>& tools) {
  const Orientation orientation = orientation_of(kind);
  Path& path = c.path;
  path.name = "random path";
  path.waypoints.push_back(waypoint(c.cell, 0, tools[0], {}, orientation));
  path.waypoints[0].joints = joints_of(start);
  const double speed = log_uniform(random, 30, 400);
  for (std::size_t i = 0; i < ends.size(); ++i) {
    const std::optional<int> frame =
        random.chance(0.6) ? std::optional<int>(random.integer(0, 1)) : std::nullopt;
    Waypoint w = waypoint(c.cell, static_cast<int>(i) + 1, tools[i + 1], frame, orientation);
    w.speed = speed;
    w.turn_rate = log_uniform(random, 0.3, 3);
    const Pose outer = frame ? c.cell.frames[static_cast<std::size_t>(*frame)].placement : Pose{};
    w.pose = outer.inverse() * ends[i];
    path.waypoints.push_back(w);
  }
}

}  // namespace

const char* name(ArmKind kind) {
  switch (kind) {
    case ArmKind::spherical_wrist:
      return "spherical wrist";
    case ArmKind::three_parallel:
      return "three parallel axes";
    case ArmKind::general_six:
      return "general six joints";
    case ArmKind::level_four:
      return "level four joints";
    case ArmKind::position_three:
      return "three joints, position alone";
    case ArmKind::axis_five:
      return "five joints, tool direction";
    case ArmKind::sliding_six:
      return "six joints, one of them sliding";
  }
  return "";
}

JointVector joints_of(const Column& q) {
  JointVector out(q.size());
  out = q;
  return out;
}

Column column_of(const JointVector& q) {
  return q;
}

std::optional<RandomCase> random_case(Random& random, ArmKind kind) {
  RandomCase c;
  c.links = links_of(random, kind);
  c.cell = cell_of(random, c.links);
  const Column start = random_configuration(random, c.links);
  set_limits(random, c.cell, start, 0.3);
  std::vector<int> tools{random.integer(0, 1)};
  std::vector<Pose> ends;
  Column end = start;
  const int segments = random.integer(1, 3);
  for (int i = 0; i < segments; ++i) {
    const bool changes = random.chance(0.15) && kind != ArmKind::level_four;
    tools.push_back(changes ? 1 - tools.back() : tools.back());
    const ReferenceArm arm(c.cell.arm, tool_pose(c.cell, tools.back()), orientation_of(kind));
    const bool on_the_spot = random.chance(0.2) && kind != ArmKind::position_three;
    const double length = on_the_spot ? 0.0 : log_uniform(random, 10, 400);
    const double turn = random.chance(0.3) && !on_the_spot ? 0.0 : random.uniform(0.05, 1.5);
    const Pose from = i == 0 || changes ? arm.forward(end) : ends.back();
    if (i > 0 && changes) return std::nullopt;  // where the arm then is is not known here
    Pose to = displaced(random, kind, from, length, turn, c.cell.arm.base);
    if (random.chance(0.6)) {  // by the joints: in reach for certain, at least at its end
      for (int k = 0; k < c.cell.arm.joint_count(); ++k)
        end[k] += (c.cell.arm.joints[static_cast<std::size_t>(k)].type == JointType::revolute ? 0.4 : 60.0) *
                  random.normal();
      if (!on_the_spot) to = arm.forward(end);
    }
    ends.push_back(to);
  }
  finish_path(random, c, kind, start, ends, tools);
  return c;
}

std::optional<RandomCase> near_singular_case(Random& random, ArmKind kind, double distance) {
  RandomCase c;
  c.links = links_of(random, kind);
  c.cell = cell_of(random, c.links);
  const int tool = random.integer(0, 1);
  const ReferenceArm arm(c.cell.arm, tool_pose(c.cell, tool), orientation_of(kind));
  const auto determinant = [&](const Column& q) {
    const Eigen::MatrixXd j = arm.jacobian(q, arm.forward(q).rotation);
    return j.rows() == j.cols() ? j.determinant() : std::sin(q[1]);
  };
  // A singular configuration: where the determinant changes its sign along a random line of joints.
  Column singular;
  for (int attempt = 0; attempt < 20 && singular.size() == 0; ++attempt) {
    const Column a = random_configuration(random, c.links);
    const Column b = random_configuration(random, c.links);
    double low = 0, high = 1;
    if (determinant(a) * determinant(b) >= 0) continue;
    const double at_a = determinant(a);
    for (int k = 0; k < 80; ++k) {
      const double middle = 0.5 * (low + high);
      (determinant(a + middle * (b - a)) * at_a > 0 ? low : high) = middle;
    }
    singular = a + low * (b - a);
  }
  if (singular.size() == 0) return std::nullopt;
  Pose middle = arm.forward(singular);
  const Eigen::JacobiSVD<Eigen::MatrixXd> svd(arm.jacobian(singular, middle.rotation),
                                              Eigen::ComputeThinU | Eigen::ComputeThinV);
  const Column lost = svd.matrixU().col(svd.matrixU().cols() - 1);
  const Column runaway = svd.matrixV().col(svd.matrixV().cols() - 1);
  const double side = random.chance(0.5) ? 1.0 : -1.0;
  const Vector3 lost_linear = lost.head(3) * arm.length();
  if (kind == ArmKind::level_four) {
    middle.position += side * distance * random_direction(random);
  } else {
    middle.position += side * distance * lost_linear / arm.length();
    if (lost.size() == 6)
      middle.rotation =
          rotation_from_vector(side * distance / arm.length() * Vector3(lost.tail(3))) * middle.rotation;
  }
  const double length =
      random.chance(0.1) && kind != ArmKind::position_three ? 0.0 : log_uniform(random, 10, 300);
  const double turn = random.chance(0.3) && length > 0 ? 0.0 : random.uniform(0.05, 0.8);
  const Pose end = displaced(random, kind, middle, length, turn, c.cell.arm.base);
  Pose begin;
  begin.position = 2 * middle.position - end.position;
  begin.rotation = middle.rotation * end.rotation.transpose() * middle.rotation;
  // To a start configuration: down the line from the middle, the joints pushed off the singularity both ways.
  std::optional<Column> start;
  for (int attempt = 0; attempt < 12 && !start; ++attempt) {
    Column q = singular + arm.scale().cwiseProduct(Column(random.uniform(-0.3, 0.3) * runaway));
    for (int i = 0; i < joints_of(q).size(); ++i) q[i] += 0.1 * arm.scale()[i] * random.normal();
    double damping = 1e-2;
    for (int i = 0; i < 80; ++i) {
      const Column e = arm.error(begin, q);
      const Eigen::MatrixXd j = arm.jacobian(q, begin.rotation);
      const Eigen::MatrixXd normal =
          j.transpose() * j + damping * Eigen::MatrixXd::Identity(arm.joints(), arm.joints());
      const Column moved = q + arm.scale().cwiseProduct(Column(normal.ldlt().solve(j.transpose() * e)));
      if (arm.error(begin, moved).norm() < e.norm()) {
        q = moved;
        damping = std::max(1e-10, 0.2 * damping);
      } else {
        damping *= 6;
      }
    }
    if (arm.solve(begin, q) && arm.smallest_singular_value(q) > 1e-4) start = q;
  }
  if (!start) return std::nullopt;
  set_limits(random, c.cell, *start, 0.5);
  finish_path(random, c, kind, *start, {end}, {tool, tool});
  c.note = "distance " + std::to_string(distance);
  return c;
}

Path path_in(Random& random, const Cell& cell, Orientation orientation) {
  Column q(cell.arm.joint_count());
  const auto each = [&](auto change) {
    for (int i = 0; i < cell.arm.joint_count(); ++i)
      change(q[i], cell.arm.joints[static_cast<std::size_t>(i)]);
  };
  each([&](double& value, const Joint& joint) {
    value = joint.continuous ? random.uniform(-pi, pi) : random.uniform(joint.lower, joint.upper);
  });
  const std::optional<int> tool = cell.tools.empty() ? std::nullopt : std::optional<int>(0);
  const ReferenceArm arm(cell.arm, tool ? tool_pose(cell, 0) : Pose{}, Orientation::full);
  Path path;
  path.name = "random path";
  const int segments = random.integer(1, 3);
  for (int i = 0; i <= segments; ++i) {
    Waypoint w;
    w.id = "W" + std::to_string(i);
    w.move = i == 0 ? Move::start : Move::linear;
    w.tool = tool;
    w.orientation = orientation;
    w.speed = log_uniform(random, 50, 800);
    w.turn_rate = log_uniform(random, 0.5, 3);
    if (i == 0) {
      w.joints = joints_of(q);
    } else {
      each([&](double& value, const Joint& joint) {
        value += (joint.type == JointType::revolute ? 0.3 : 80.0) * random.normal();
      });
      w.pose = arm.forward(q);
    }
    path.waypoints.push_back(w);
  }
  return path;
}

}  // namespace pathvet::test
