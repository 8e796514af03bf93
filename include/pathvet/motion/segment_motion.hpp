#pragma once

#include <array>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "pathvet/model/path.hpp"
#include "pathvet/motion/curve.hpp"

namespace pathvet {

/// A frame that a positioner carries, while the positioner's joints go evenly over one segment. A reader of
/// its pose in the world; `nullptr` stands for a frame that stands still.
class MovingFrame {
 public:
  virtual ~MovingFrame() = default;
  /// Pose of the frame in the world and its derivatives by the segment's fraction.
  virtual void at(double fraction, CurvePoint& out) const = 0;
};

/// The programmed TCP motion of one Cartesian segment in the world, by its fraction (share of its time): one
/// to three smooth pieces (half a corner, the leg, half a corner).
class SegmentMotion {
 public:
  static constexpr int most_pieces = 3;

  [[nodiscard]] int piece_count() const { return piece_count_; }
  [[nodiscard]] double piece_begin(int piece) const { return piece == 0 ? 0.0 : piece_end(piece - 1); }
  [[nodiscard]] double piece_end(int piece) const { return pieces_[static_cast<std::size_t>(piece)].end; }

  /// Pose and derivatives by the fraction; `fraction` lies within `piece` (a hair beyond is fine: pieces are
  /// analytic).
  void at(int piece, double fraction, CurvePoint& out) const;
  /// Bounds over a whole piece, by the fraction.
  [[nodiscard]] const CurveBounds& bounds(int piece) const {
    return pieces_[static_cast<std::size_t>(piece)].bounds;
  }

  /// mm travelled in the frame from the segment's begin to a fraction.
  [[nodiscard]] double length_at(double fraction) const;
  /// Pose of the waypoint's frame in the world.
  [[nodiscard]] Pose frame(double fraction) const;

  [[nodiscard]] double length() const { return length_; }      ///< mm, really travelled
  [[nodiscard]] double turn() const { return turn_; }          ///< rad
  [[nodiscard]] double duration() const { return duration_; }  ///< s; 0 where nothing moves
  [[nodiscard]] bool on_the_spot() const { return on_the_spot_; }

  // What re-timing needs to know of how the motion is made up.
  [[nodiscard]] const Leg& leg() const {
    return leg_;
  }  ///< whole, without blends; in the world, or the moving frame
  [[nodiscard]] bool is_corner(int piece) const { return pieces_[static_cast<std::size_t>(piece)].is_corner; }
  [[nodiscard]] double blend_in() const { return blend_in_; }    ///< mm, at its begin; 0: none
  [[nodiscard]] double blend_out() const { return blend_out_; }  ///< mm, at its end
  [[nodiscard]] double leg_duration() const {
    return leg_duration_;
  }  ///< s, of the whole leg at programmed speed
  [[nodiscard]] bool has_moving_frame() const { return moving_frame_ != nullptr; }

 private:
  friend class MotionPlan;
  struct Piece {
    bool is_corner = false;
    bool second_half = false;
    double end = 1;             // fraction
    double from = 0, rate = 1;  // own parameter (leg) or time (corner) at the begin, and its rate by fraction
    double length_before = 0, length = 0;
    CurveBounds bounds;
  };

  void local(int piece, double fraction, CurvePoint& out) const;

  Leg leg_;
  Corner corner_in_, corner_out_;
  std::array<Piece, most_pieces> pieces_{};
  int piece_count_ = 1;
  double length_ = 0, turn_ = 0, duration_ = 0;
  double blend_in_ = 0, blend_out_ = 0, leg_duration_ = 0;
  bool on_the_spot_ = false;
  Pose frame_;
  std::shared_ptr<const MovingFrame> moving_frame_;
};

}  // namespace pathvet
