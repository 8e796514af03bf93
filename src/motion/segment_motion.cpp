#include "pathvet/motion/segment_motion.hpp"

#include <boost/math/quadrature/gauss.hpp>

namespace pathvet {

void SegmentMotion::local(int piece, double fraction, CurvePoint& out) const {
  const Piece& p = pieces_[static_cast<std::size_t>(piece)];
  const double own = p.from + (fraction - piece_begin(piece)) * p.rate;
  if (p.is_corner) {
    (p.second_half ? corner_in_ : corner_out_).at(own, out);
  } else {
    leg_.at(own, out);
  }
  out.first *= p.rate;
  out.second *= p.rate * p.rate;
}

void SegmentMotion::at(int piece, double fraction, CurvePoint& out) const {
  local(piece, fraction, out);
  if (!moving_frame_) return;
  CurvePoint frame;
  moving_frame_->at(fraction, frame);
  const Matrix3& r = frame.pose.rotation;
  const Vector3 spin = frame.first.tail<3>();
  const Vector3 spin_rate = frame.second.tail<3>();
  const Vector3 ray = r * out.pose.position;
  const Vector3 along = r * out.first.head<3>();
  const Vector3 turning = r * out.first.tail<3>();
  out.second.head<3>() = frame.second.head<3>() + spin_rate.cross(ray) + spin.cross(spin.cross(ray)) +
                         2 * spin.cross(along) + r * out.second.head<3>();
  out.second.tail<3>() = spin_rate + spin.cross(turning) + r * out.second.tail<3>();
  out.first.head<3>() = frame.first.head<3>() + spin.cross(ray) + along;
  out.first.tail<3>() = spin + turning;
  out.pose = frame.pose * out.pose;
}

double SegmentMotion::length_at(double fraction) const {
  int piece = 0;
  while (piece + 1 < piece_count_ && fraction > piece_end(piece)) ++piece;
  const Piece& p = pieces_[static_cast<std::size_t>(piece)];
  const double begin = piece_begin(piece);
  if (!p.is_corner) return p.length_before + p.length * (fraction - begin) / (p.end - begin);
  const auto speed = [&](double at) {
    CurvePoint point;
    local(piece, at, point);
    return point.first.head<3>().norm();
  };
  return p.length_before + boost::math::quadrature::gauss<double, 30>::integrate(speed, begin, fraction);
}

Pose SegmentMotion::frame(double fraction) const {
  if (!moving_frame_) return frame_;
  CurvePoint frame;
  moving_frame_->at(fraction, frame);
  return frame.pose;
}

}  // namespace pathvet
