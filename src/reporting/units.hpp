#pragma once

#include <string>

#include "pathvet/checks/finding.hpp"
#include "pathvet/model/arm.hpp"

/// From internal units to those of reports, and numbers as people read them.
namespace pathvet::reporting {

/// The angle in degrees. Of the doubles within a rounding error of it, one of at most 15 digits is preferred
/// if reading turns it into exactly `radians`: a limit written as 170 is reported as 170.
[[nodiscard]] double degrees(double radians);

/// `value` in the unit that `unit(quantity)` names.
[[nodiscard]] double to_user(double value, Quantity quantity);
[[nodiscard]] const char* unit(Quantity quantity);

[[nodiscard]] Quantity position_quantity(JointType type);
[[nodiscard]] Quantity speed_quantity(JointType type);

/// Fixed-axis angles (rad) with Rz(z) Ry(y) Rx(x) = rotation; y in [-pi/2, pi/2]. Where only a sum of x and z
/// is determined, x is 0.
[[nodiscard]] Vector3 roll_pitch_yaw(const Matrix3& rotation);

/// A number for people: about `digits` significant digits, no trailing zeros, exponents only far from 1;
/// below 1e-6 in size it is 0.
[[nodiscard]] std::string plain(double value, int digits = 4);

/// At most `decimals` decimals, no trailing zeros.
[[nodiscard]] std::string fixed(double value, int decimals);

/// The same, never above the value, three significant digits: for a speed that has to hold.
[[nodiscard]] std::string plain_below(double value);

/// A value and a bound with as many digits as it takes to tell them apart.
struct Compared {
  std::string value, bound;
};
[[nodiscard]] Compared compared(double value, double bound, Quantity quantity);

/// `plain` with its unit: "412 deg/s".
[[nodiscard]] std::string amount(double value, Quantity quantity);

}  // namespace pathvet::reporting
