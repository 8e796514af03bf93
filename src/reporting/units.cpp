#include "reporting/units.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>

#include "pathvet/model/units.hpp"

namespace pathvet::reporting {
namespace {

constexpr int tidy_digits = 15;  // every decimal number of so many digits survives a double
constexpr int most_digits = 17;

struct QuantityRow {
  const char* unit;
  bool is_angle;
};

// In the order of Quantity.
constexpr std::array<QuantityRow, 8> quantity_rows = {{{"", false},
                                                       {"", false},
                                                       {"deg", true},
                                                       {"mm", false},
                                                       {"deg/s", true},
                                                       {"mm/s", false},
                                                       {"deg/s^2", true},
                                                       {"mm/s^2", false}}};
static_assert(quantity_rows.size() == static_cast<std::size_t>(Quantity::linear_acceleration) + 1);

const QuantityRow& row(Quantity quantity) {
  return quantity_rows.at(static_cast<std::size_t>(quantity));
}

/// `value` rounded to 15 significant digits.
double tidied(double value) {
  std::array<char, 40> text{};
  const auto written =
      std::to_chars(text.data(), text.data() + text.size(), value, std::chars_format::general, tidy_digits);
  double read = value;
  std::from_chars(text.data(), written.ptr, read);
  return read;
}

std::string without_trailing_zeros(std::string text) {
  if (text.find('.') == std::string::npos) return text;
  text.erase(text.find_last_not_of('0') + 1);
  if (text.back() == '.') text.pop_back();
  return text == "-0" ? "0" : text;
}

int exponent_of(double value) {
  return static_cast<int>(std::floor(std::log10(std::abs(value))));
}

}  // namespace

double degrees(double radians) {
  const double quotient = radians / radians_per_degree;
  if (!std::isfinite(quotient)) return quotient;
  const double tidy = tidied(quotient);
  return tidy * radians_per_degree == radians ? tidy : quotient;
}

double to_user(double value, Quantity quantity) {
  return row(quantity).is_angle ? degrees(value) : value;
}

const char* unit(Quantity quantity) {
  return row(quantity).unit;
}

Quantity position_quantity(JointType type) {
  return type == JointType::revolute ? Quantity::angle : Quantity::length;
}

Quantity speed_quantity(JointType type) {
  return type == JointType::revolute ? Quantity::angular_speed : Quantity::linear_speed;
}

Vector3 roll_pitch_yaw(const Matrix3& rotation) {
  // Below this cosine of the pitch, roll and yaw are rounding noise of the matrix' entries.
  constexpr double least_cosine = 1e-12;
  const double cosine = std::hypot(rotation(0, 0), rotation(1, 0));
  const double pitch = std::atan2(-rotation(2, 0), cosine);
  if (cosine < least_cosine) return {0, pitch, std::atan2(-rotation(0, 1), rotation(1, 1))};
  return {std::atan2(rotation(2, 1), rotation(2, 2)), pitch, std::atan2(rotation(1, 0), rotation(0, 0))};
}

std::string fixed(double value, int decimals) {
  return without_trailing_zeros(fmt::format("{:.{}f}", value, decimals));
}

std::string plain(double value, int digits) {
  constexpr double least_shown = 1e-6;  // below it, in any unit of a report, there is only rounding noise
  if (std::abs(value) < least_shown) return "0";
  if (!std::isfinite(value)) return fmt::format("{}", value);
  const int exponent = exponent_of(value);
  if (exponent < -4 || exponent > 14) return fmt::format("{:.{}g}", value, digits);
  const int least_decimals = exponent < 4 ? 1 : 0;
  return fixed(value, std::max(digits - 1 - exponent, least_decimals));
}

std::string plain_below(double value) {
  constexpr int digits = 3;
  if (!(value > 0) || !std::isfinite(value)) return plain(value);
  const double per_step = std::pow(10.0, digits - 1 - exponent_of(value));
  double below = std::floor(value * per_step) / per_step;
  if (below > value) below = (std::floor(value * per_step) - 1) / per_step;
  return plain(below, digits);
}

Compared compared(double value, double bound, Quantity quantity) {
  const double user_value = to_user(value, quantity);
  const double user_bound = to_user(bound, quantity);
  Compared texts;
  for (int digits = 4; digits <= most_digits; ++digits) {
    texts = {plain(user_value, digits), plain(user_bound, digits)};
    if (texts.value != texts.bound || user_value == user_bound) break;
  }
  if (*unit(quantity) == '\0') return texts;
  return {texts.value + ' ' + unit(quantity), texts.bound + ' ' + unit(quantity)};
}

std::string amount(double value, Quantity quantity) {
  const std::string number = plain(to_user(value, quantity));
  return *unit(quantity) == '\0' ? number : number + ' ' + unit(quantity);
}

}  // namespace pathvet::reporting
