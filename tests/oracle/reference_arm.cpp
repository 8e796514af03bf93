#include "reference_arm.hpp"

#include <Eigen/QR>
#include <Eigen/SVD>
#include <cmath>
#include <random>

#include "pathvet/model/units.hpp"
#include "support/kdl_frames.hpp"

namespace pathvet::test {
namespace {

KDL::JntArray array_of(const Column& q) {
  KDL::JntArray out(static_cast<unsigned>(q.size()));
  out.data = q;
  return out;
}

Vector3 vector_of(const Matrix3& rotation) {
  const Eigen::AngleAxisd turn{Eigen::Quaterniond(rotation).normalized()};
  const double angle = turn.angle() > pi ? turn.angle() - 2 * pi : turn.angle();
  return angle * turn.axis();
}

}  // namespace

ReferenceArm::ReferenceArm(const Arm& arm, const Pose& tool, Orientation orientation)
    : arm_(&arm),
      orientation_(orientation),
      length_(arm.characteristic_length),
      scale_(arm.joint_count()),
      chain_(std::make_shared<KDL::Chain>()) {
  const auto fixed = [&](const Pose& pose) {
    chain_->addSegment(KDL::Segment(KDL::Joint(KDL::Joint::Fixed), to_kdl(pose)));
  };
  fixed(arm.base);
  for (int i = 0; i < arm.joint_count(); ++i) {
    const Joint& joint = arm.joints[static_cast<std::size_t>(i)];
    const bool turns = joint.type == JointType::revolute;
    fixed(joint.before);
    chain_->addSegment(
        KDL::Segment(KDL::Joint(turns ? KDL::Joint::RotZ : KDL::Joint::TransZ), to_kdl(joint.after)));
    scale_[i] = turns ? 1.0 : length_;
  }
  fixed(arm.flange * tool);
  forward_ = std::make_shared<KDL::ChainFkSolverPos_recursive>(*chain_);
  jacobian_ = std::make_shared<KDL::ChainJntToJacSolver>(*chain_);
}

Pose ReferenceArm::forward(const Column& q) const {
  KDL::Frame frame;
  forward_->JntToCart(array_of(q), frame);
  return from_kdl(frame);
}

Column ReferenceArm::bind(const Matrix3& rotation, const Vector3& linear, const Vector3& angular) const {
  Column out(orientation_ == Orientation::full ? 6 : orientation_ == Orientation::axis ? 5 : 3);
  out.head(3) = linear / length_;
  if (orientation_ == Orientation::full) out.tail(3) = angular;
  if (orientation_ == Orientation::axis) {
    out[3] = rotation.col(0).dot(angular);
    out[4] = rotation.col(1).dot(angular);
  }
  return out;
}

Eigen::MatrixXd ReferenceArm::jacobian(const Column& q, const Matrix3& rotation) const {
  KDL::Jacobian full(static_cast<unsigned>(q.size()));
  jacobian_->JntToJac(array_of(q), full);
  Eigen::MatrixXd out;
  for (Eigen::Index i = 0; i < q.size(); ++i) {
    const Column column =
        bind(rotation, full.data.block<3, 1>(0, i), full.data.block<3, 1>(3, i)) * scale_[i];
    out.conservativeResize(column.size(), i + 1);
    out.col(i) = column;
  }
  return out;
}

double ReferenceArm::smallest_singular_value(const Column& q) const {
  const Matrix3 rotation = forward(q).rotation;
  return Eigen::JacobiSVD<Eigen::MatrixXd>(jacobian(q, rotation)).singularValues().minCoeff();
}

Column ReferenceArm::error(const Pose& target, const Column& q) const {
  const Pose now = forward(q);
  Vector3 angular = Vector3::Zero();
  if (orientation_ == Orientation::full) angular = vector_of(target.rotation * now.rotation.transpose());
  if (orientation_ == Orientation::axis) {
    const Vector3 across = now.rotation.col(2).cross(target.rotation.col(2));
    const double sine = across.norm();
    if (sine > 0)
      angular = across * (std::atan2(sine, now.rotation.col(2).dot(target.rotation.col(2))) / sine);
  }
  return bind(target.rotation, target.position - now.position, angular);
}

std::pair<double, double> ReferenceArm::miss(const Pose& target, const Column& q) const {
  const Column e = error(target, q);
  return {e.head(3).norm() * length_, e.size() > 3 ? e.tail(e.size() - 3).norm() : 0.0};
}

bool ReferenceArm::solve(const Pose& target, Column& q, double largest_change) const {
  double last = 1e300;
  for (int i = 0; i < 30; ++i) {
    const Eigen::MatrixXd j = jacobian(q, target.rotation);
    const Column change = j.colPivHouseholderQr().solve(error(target, q));
    const double size = change.norm();
    if (!(size < largest_change)) return false;
    q += scale_.cwiseProduct(change);
    if (size < 1e-13 || (i > 3 && size > 0.5 * last && size < 1e-7)) {
      const auto [position, orientation] = miss(target, q);
      return position < 1e-8 * length_ && orientation < 1e-8;
    }
    last = size;
  }
  return false;
}

Column ReferenceArm::rate(const MovingTarget& target, const Column& q) const {
  const Column wanted = bind(target.pose.rotation, target.velocity, target.spin);
  return scale_.cwiseProduct(jacobian(q, target.pose.rotation).colPivHouseholderQr().solve(wanted));
}

std::vector<Column> ReferenceArm::solutions(const Pose& target, int seeds) const {
  std::mt19937_64 engine(7);
  std::uniform_real_distribution<double> spread(-1, 1);
  std::vector<Column> out;
  for (int seed = 0; seed < seeds; ++seed) {
    Column q(joints());
    for (Eigen::Index i = 0; i < joints(); ++i) {
      const Joint& joint = arm_->joints[static_cast<std::size_t>(i)];
      q[i] = joint.type == JointType::revolute
                 ? pi * spread(engine)
                 : 0.5 * (joint.lower + joint.upper) + 0.5 * spread(engine) * (joint.upper - joint.lower);
    }
    double damping = 1e-2;
    Column e = error(target, q);
    for (int i = 0; i < 60 && e.norm() > 1e-6; ++i) {
      const Eigen::MatrixXd j = jacobian(q, target.rotation);
      const Eigen::MatrixXd normal =
          j.transpose() * j + damping * Eigen::MatrixXd::Identity(joints(), joints());
      const Column moved = q + scale_.cwiseProduct(Column(normal.ldlt().solve(j.transpose() * e)));
      const Column next = error(target, moved);
      if (next.norm() < e.norm()) {
        q = moved;
        e = next;
        damping = std::max(1e-10, 0.2 * damping);
      } else {
        damping *= 6;
      }
    }
    if (e.norm() > 1e-6 || !solve(target, q)) continue;
    bool known = false;
    for (const Column& other : out) {
      double most = 0;
      for (Eigen::Index i = 0; i < joints(); ++i) {
        const bool turns = scale_[i] == 1.0;
        const double d = q[i] - other[i];
        most = std::max(most, std::abs(turns ? std::remainder(d, 2 * pi) : d / length_));
      }
      known = known || most < 1e-6;
    }
    if (!known) out.push_back(q);
  }
  return out;
}

double least_time(const Arm& arm, const Column& from, const Column& to) {
  double most = 0;
  for (int i = 0; i < arm.joint_count(); ++i)
    most = std::max(most, std::abs(to[i] - from[i]) / arm.joints[static_cast<std::size_t>(i)].speed);
  return most;
}

}  // namespace pathvet::test
