#pragma once

#include <array>
#include <string>

#include "pathvet/kinematics/chain.hpp"
#include "pathvet/model/path.hpp"

namespace pathvet {

/// The factors of the determinant of an arm's Jacobian, as far as its geometry makes it factor. Found from
/// the geometry (no table of models) and confirmed numerically when the analysis is built: at fixed generic
/// configurations the determinant of the scaled Jacobian over the product of the factors has to be one
/// constant.
///
/// `factored` are arms of six revolute joints with axes 2 and 3 parallel and axes 4, 5, 6 meeting in a point,
/// or with axes 2, 3, 4 parallel and axes 5, 6 meeting. Let z_i be the axes, P the point where the last axes
/// meet, n_12 the direction of the common normal from axis 1 to axis 2 (z_1 x z_2 where they meet), n_34
/// likewise. Then
///
/// shoulder = n_12 . (P - axis 1): on which side of axis 1, seen along axis 2, the wrist is;
///
/// elbow = z_3 . (upper x forearm), upper from axis 2 to axis 3, forearm from axis 3 to P, its sign turned
/// where (z_3 x z_4) . n_34 >= 0; with three parallel axes forearm from axis 3 to axis 4, the sign as it is;
///
/// wrist = z_5 . (z_4 x z_6).
///
/// For arms in Denavit-Hartenberg form whose x axis after joint 1 points along n_12 these come out as
/// positive multiples of the textbook factors (Siciliano et al., Robotics: Modelling, Planning and Control,
/// section 3.3); where it points the other way (alpha_1 = -90 degrees without offset, as in Craig's arm) the
/// shoulder's sign is turned. Axes alone decide here, so that one arm written in several ways has one name
/// for each branch.
class BranchAnalysis {
 public:
  enum class Kind {
    none,         ///< no square Jacobian of the bound directions: no branch
    determinant,  ///< one sign, that of the determinant
    factored      ///< shoulder, elbow, wrist
  };

  /// `tool`: pose of the TCP in the flange. It matters only where the orientation binds in part.
  explicit BranchAnalysis(const Arm& arm, Orientation orientation = Orientation::full, const Pose& tool = {});

  [[nodiscard]] Kind kind() const { return kind_; }

  /// Number of factors: 0, 1 or 3.
  [[nodiscard]] int count() const;

  /// The factors at a configuration, each free of units (lengths over the characteristic length): shoulder,
  /// elbow, wrist for `factored`; the determinant of the scaled Jacobian of the bound directions for
  /// `determinant`. Those are the six rows for `full`, the position and the angular rows along the tool's x
  /// and y for `axis`, the position for `free`. Members beyond count() are 0.
  [[nodiscard]] std::array<double, 3> factors(const JointVector& q) const;

  /// "+-+" and the like, one sign a factor, "" for `none`. A factor of exactly zero counts as '+'.
  [[nodiscard]] std::string signs(const JointVector& q) const;

 private:
  enum class Shape { spherical_wrist, three_parallel };

  [[nodiscard]] bool detect_shape();
  [[nodiscard]] bool confirmed() const;
  template <int N>
  [[nodiscard]] double determinant(const JointColumn<N>& q) const;
  [[nodiscard]] std::array<double, 3> geometric_factors(const JointVector& q) const;

  Kind kind_ = Kind::none;
  Orientation orientation_ = Orientation::full;
  Chain chain_;
  Shape shape_ = Shape::spherical_wrist;
  bool shoulder_apart_ = false;  // axes 1 and 2 have a common normal of their own
  double shoulder_foot_1_ = 0;   // places of its feet: on axis 1 from joint 1's origin, mm
  double shoulder_foot_2_ = 0;   // and on axis 2
  double wrist_place_ = 0;       // of P on axis 6, from joint 6's origin, mm
  double elbow_sign_ = 1;
};

}  // namespace pathvet
