#include "pathvet/tracking/arc_tracker.hpp"

#include <Eigen/Eigenvalues>
#include <Eigen/QR>
#include <Eigen/SVD>
#include <cmath>

#include "pathvet/tracking/continuity.hpp"

namespace pathvet {
namespace {

constexpr int most_corrections = 12;
/// A correction below this (scaled joints) has converged: Newton's next one would be its square.
constexpr double converged = 1e-12;

}  // namespace

ArcTracker::ArcTracker(const Dynamic& task, int piece) : task_(task), piece_(piece), joints_(task.joints()) {}

void ArcTracker::set(Place& place, const Unknowns& y) const {
  place.y = y;
  place.task.q = task_.scale().cwiseProduct(y.head(joints_));
  place.task.fraction = unit_ * y[joints_];
}

void ArcTracker::linearise(Place& place) const {
  task_.evaluate(piece_, place.task);
  place.matrix.resize(task_.rows(), joints_ + 1);
  place.matrix.leftCols(joints_) = place.task.jacobian;
  place.matrix.col(joints_) = -unit_ * task_.target_rate(place.task);
}

ArcTracker::Unknowns ArcTracker::solve(const Place& place, const Rows& right_side) const {
  Unknowns coefficients = place.left.leftCols(joints_).transpose() * right_side;
  coefficients.array() /= place.singular.head(joints_).array();
  return place.right.leftCols(joints_) * coefficients;
}

void ArcTracker::compute(Place& place, const Unknowns& sense) const {
  linearise(place);
  const Eigen::JacobiSVD<Matrix> svd(place.matrix, Eigen::ComputeFullU | Eigen::ComputeFullV);
  place.left = svd.matrixU();
  place.right = svd.matrixV();
  place.singular = svd.singularValues();
  place.regularity = place.singular[joints_ - 1];
  place.tangent = place.right.col(joints_);
  if (place.tangent.dot(sense) < 0) place.tangent = -place.tangent;
  const JointVector rate = place.tangent.head(joints_);
  place.curvature = -solve(place, task_.second_order(place.task, rate, unit_ * place.tangent[joints_]));
  task_.bound_bend(place.task);
  const double second = task_.target_second(piece_) * unit_ * unit_;
  const double third = task_.target_third(piece_) * unit_ * unit_ * unit_;
  place.bend = std::hypot(place.task.bend.first, second);
  place.bend_second = std::hypot(place.task.bend.second, third);
}

void ArcTracker::start(double fraction, const JointVector& q, bool backwards) {
  Unknowns sense = Unknowns::Zero(joints_ + 1);
  sense[joints_] = backwards ? -1.0 : 1.0;
  start(fraction, q, sense);
}

void ArcTracker::start(double fraction, const JointVector& q, const Unknowns& sense) {
  place_.task.fraction = fraction;
  place_.task.q = q;
  task_.evaluate(piece_, place_.task);
  const double speed = task_.target_rate(place_.task).norm();
  unit_ = speed > 0 ? 1.0 / speed : 1.0;
  Unknowns y(joints_ + 1);
  y.head(joints_) = q.cwiseQuotient(task_.scale());
  y[joints_] = fraction / unit_;
  set(place_, y);
  place_.task.fraction = fraction;
  compute(place_, sense);
}

bool ArcTracker::correct(Place& place, const Unknowns& base, const Unknowns& border, double along) const {
  Matrix bordered(task_.rows() + 1, joints_ + 1);
  Rows right_side(task_.rows() + 1);
  double last = 1;
  for (int i = 0; i < most_corrections; ++i) {
    linearise(place);
    bordered.topRows(task_.rows()) = place.matrix;
    bordered.bottomRows(1) = border.transpose();
    right_side.head(task_.rows()) = place.task.error;
    right_side[task_.rows()] = along - border.dot(place.y - base);
    const Unknowns change = bordered.colPivHouseholderQr().solve(right_side);
    const double size = change.norm();
    if (!std::isfinite(size) || size > 0.5) return false;
    set(place, place.y + change);
    if (size < converged || (i > 2 && size > 0.5 * last && size < 1e-10)) return true;
    last = size;
  }
  return false;
}

Node ArcTracker::node(const Place& place) const {
  Node out;
  out.fraction = place.task.fraction;
  out.fraction_rate = unit_ * place.tangent[joints_];
  out.fraction_rate_rate = unit_ * place.curvature[joints_];
  out.q = place.task.q;
  out.rate = task_.scale().cwiseProduct(place.tangent.head(joints_));
  out.rate_rate = task_.scale().cwiseProduct(place.curvature.head(joints_));
  return out;
}

bool ArcTracker::advance(double most, Step& step) {
  const double inverse_norm = 1.0 / place_.regularity;
  // 0.9: the corrected node must lie well inside the ball, and rounding must not decide.
  const double length = std::min(most, 0.9 * provable_travel(inverse_norm, place_.bend));
  if (!(length > 0)) return false;
  Place next = place_;
  set(next, place_.y + length * place_.tangent + 0.5 * length * length * place_.curvature);
  if (!correct(next, place_.y, place_.tangent, length)) return false;
  compute(next, place_.tangent);
  step = Step{};
  step.kind = Step::Kind::arc;
  step.piece = piece_;
  step.length = length;
  step.fraction_unit = unit_;
  step.begin = node(place_);
  step.end = node(next);
  // The step's own parameter is the advance along the begin's tangent; at the end the curve is parametrised
  // anew, so the end's derivatives are brought to this step's parameter.
  const double gain = 1.0 / place_.tangent.dot(next.tangent);
  const Unknowns rate = gain * next.tangent;
  const double bent = place_.tangent.dot(next.curvature);
  const Unknowns rate_rate = gain * gain * (next.curvature - bent * gain * next.tangent);
  step.end.rate = task_.scale().cwiseProduct(rate.head(joints_));
  step.end.fraction_rate = unit_ * rate[joints_];
  step.end.rate_rate = task_.scale().cwiseProduct(rate_rate.head(joints_));
  step.end.fraction_rate_rate = unit_ * rate_rate[joints_];
  prove(step, std::max(1.0, inverse_norm), place_.bend, place_.bend_second, 1.0, 0.0, 0.0);
  place_ = next;
  return true;
}

void ArcTracker::at(const Step& step, double t, Node& out) const {
  ArcTracker own(task_, piece_);
  own.unit_ = step.fraction_unit;
  Unknowns base(joints_ + 1);
  base.head(joints_) = step.begin.q.cwiseQuotient(task_.scale());
  base[joints_] = step.begin.fraction / own.unit_;
  Unknowns tangent(joints_ + 1);
  tangent.head(joints_) = step.begin.rate.cwiseQuotient(task_.scale());
  tangent[joints_] = step.begin.fraction_rate / own.unit_;
  Unknowns curvature(joints_ + 1);
  curvature.head(joints_) = step.begin.rate_rate.cwiseQuotient(task_.scale());
  curvature[joints_] = step.begin.fraction_rate_rate / own.unit_;
  Place place;
  own.set(place, base + t * tangent + 0.5 * t * t * curvature);
  if (!own.correct(place, base, tangent, t)) own.set(place, base + t * tangent + 0.5 * t * t * curvature);
  own.compute(place, tangent);
  const double gain = 1.0 / tangent.dot(place.tangent);
  const double bent = tangent.dot(place.curvature);
  place.curvature = gain * gain * (place.curvature - bent * gain * place.tangent);
  place.tangent = gain * place.tangent;
  out = own.node(place);
}

ArcTracker::Rows ArcTracker::bilinear(const Place& place, const Unknowns& a, const Unknowns& b) const {
  // Polarisation: D2F[a, b] = (D2F[a+b, a+b] - D2F[a-b, a-b]) / 4.
  const Unknowns sum = a + b;
  const Unknowns difference = a - b;
  const JointVector sum_joints = sum.head(joints_);
  const JointVector difference_joints = difference.head(joints_);
  return 0.25 * (task_.second_order(place.task, sum_joints, unit_ * sum[joints_]) -
                 task_.second_order(place.task, difference_joints, unit_ * difference[joints_]));
}

std::optional<ArcTracker::Meeting> ArcTracker::meeting() const {
  // Lyapunov-Schmidt reduction: along the two directions that the linearised task (nearly) does not see, the
  // one row it (nearly) loses is a quadratic form; its stationary point is where two curves meet if the
  // target were shifted by the value found there. Iterated until the point stands still.
  Place here = place_;
  Eigen::Matrix2d form;
  Unknowns first, second;
  double shift = 0;
  Rows row;
  for (int i = 0; i < 30; ++i) {
    row = here.left.col(joints_ - 1);
    first = here.right.col(joints_);
    second = here.right.col(joints_ - 1);
    form(0, 0) = row.dot(bilinear(here, first, first));
    form(0, 1) = form(1, 0) = row.dot(bilinear(here, first, second));
    form(1, 1) = row.dot(bilinear(here, second, second));
    const double determinant = form.determinant();
    if (!(std::abs(determinant) > 1e-12)) return std::nullopt;
    const Eigen::Vector2d slope(0.0, here.regularity);
    const Eigen::Vector2d move = -form.inverse() * slope;
    // The rows that are not lost are met by a Newton correction across the two directions.
    Unknowns change = first * move[0] + second * move[1];
    Unknowns coefficients = here.left.leftCols(joints_ - 1).transpose() * here.task.error;
    coefficients.array() /= here.singular.head(joints_ - 1).array();
    change += here.right.leftCols(joints_ - 1) * coefficients;
    if (!(change.norm() < 0.3)) return std::nullopt;
    set(here, here.y + change);
    compute(here, place_.tangent);
    shift = -here.left.col(joints_ - 1).dot(here.task.error);
    if (change.norm() < 1e-11) break;
    if (i == 29) return std::nullopt;
  }
  Meeting out;
  out.fraction = here.task.fraction;
  out.y = here.y;
  row = here.left.col(joints_ - 1);
  const double length = task_.chain().characteristic_length();
  out.position_miss = std::abs(shift) * row.head(3).norm() * length;
  out.orientation_miss = row.size() > 3 ? std::abs(shift) * row.tail(row.size() - 3).norm() : 0.0;
  out.crosses = form.determinant() < 0;
  if (!out.crosses) return out;
  // Directions in which the quadratic form vanishes; the one nearest to the current tangent is its
  // continuation.
  first = here.right.col(joints_);
  second = here.right.col(joints_ - 1);
  form(0, 0) = row.dot(bilinear(here, first, first));
  form(0, 1) = form(1, 0) = row.dot(bilinear(here, first, second));
  form(1, 1) = row.dot(bilinear(here, second, second));
  const Eigen::SelfAdjointEigenSolver<Eigen::Matrix2d> eigen(form);
  const double low = eigen.eigenvalues()[0];
  const double high = eigen.eigenvalues()[1];
  if (!(low < 0 && high > 0)) return std::nullopt;
  double best = -1;
  for (const double sign : {1.0, -1.0}) {
    const Eigen::Vector2d direction =
        (std::sqrt(high) * eigen.eigenvectors().col(0) + sign * std::sqrt(-low) * eigen.eigenvectors().col(1))
            .normalized();
    Unknowns candidate = first * direction[0] + second * direction[1];
    const double along = candidate.dot(place_.tangent);
    if (along < 0) candidate = -candidate;
    if (std::abs(along) > best) {
      best = std::abs(along);
      out.ahead = candidate;
    }
  }
  return out;
}

bool ArcTracker::cross(const Meeting& meeting, double beyond, double most, Step& step) {
  Place next = place_;
  set(next, meeting.y + beyond * meeting.ahead);
  const double rate = unit_ * meeting.ahead[joints_];
  if (next.task.fraction < most) {
    if (!correct(next, meeting.y, meeting.ahead, beyond)) return false;
  }
  if (next.task.fraction >= most) {
    // The fraction itself is the border: the end lies exactly there.
    if (!(rate > 0)) return false;
    beyond = (most - meeting.fraction) / rate;
    if (!(beyond > 0)) return false;
    set(next, meeting.y + beyond * meeting.ahead);
    Unknowns along_fraction = Unknowns::Zero(joints_ + 1);
    along_fraction[joints_] = 1;
    if (!correct(next, meeting.y, along_fraction, most / unit_ - meeting.y[joints_])) return false;
    next.task.fraction = most;
  }
  // A correction that is not small against the distance crossed has found another curve.
  if ((next.y - meeting.y - beyond * meeting.ahead).norm() > 0.2 * beyond) return false;
  compute(next, meeting.ahead);
  step = Step{};
  step.kind = Step::Kind::interpolated;
  step.piece = piece_;
  step.length = (next.y - place_.y).norm();
  step.fraction_unit = unit_;
  step.begin = node(place_);
  step.end = node(next);
  step.proven = true;  // the smooth continuation exists: two curves cross within a tenth of the tolerance
  step.rate_bound = 1.0;
  place_ = next;
  return true;
}

void ArcTracker::stop_at(const Meeting& meeting, double fraction, Step& step) const {
  Place end = place_;
  const double along = (fraction / unit_ - meeting.y[joints_]) / meeting.ahead[joints_];
  const double safe = std::abs(meeting.ahead[joints_]) > 1e-9 ? along : 0.0;
  set(end, meeting.y + safe * meeting.ahead);
  end.task.fraction = fraction;
  end.tangent = meeting.ahead;
  end.curvature = place_.curvature;
  step = Step{};
  step.kind = Step::Kind::interpolated;
  step.piece = piece_;
  step.length = (end.y - place_.y).norm();
  step.fraction_unit = unit_;
  step.begin = node(place_);
  step.end = node(end);
  step.end.fraction = fraction;
  step.proven = true;
  step.rate_bound = 1.0;
}

}  // namespace pathvet
