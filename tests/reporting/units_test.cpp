#include "reporting/units.hpp"

#include <doctest/doctest.h>

#include <cmath>
#include <random>
#include <string>

#include "pathvet/model/pose.hpp"
#include "pathvet/model/units.hpp"

using namespace pathvet;
using namespace pathvet::reporting;

TEST_CASE("an angle that was read as a decimal number is reported as that number") {
  for (int hundredths = -36000; hundredths <= 36000; ++hundredths) {
    const double written = hundredths / 100.0;
    CHECK(degrees(written * radians_per_degree) == written);
  }
}

TEST_CASE("any other angle is converted to within rounding") {
  std::mt19937_64 random(20240501);
  std::uniform_real_distribution<double> angle(-10, 10);
  for (int i = 0; i < 10000; ++i) {
    const double radians = angle(random);
    CHECK(degrees(radians) == doctest::Approx(radians * 180 / pi).epsilon(1e-15));
  }
  CHECK(std::isnan(degrees(NAN)));
  CHECK(std::isinf(degrees(INFINITY)));
}

TEST_CASE("units") {
  CHECK(std::string(unit(Quantity::none)).empty());
  CHECK(std::string(unit(Quantity::pure)).empty());
  CHECK(std::string(unit(Quantity::angle)) == "deg");
  CHECK(std::string(unit(Quantity::length)) == "mm");
  CHECK(std::string(unit(Quantity::angular_speed)) == "deg/s");
  CHECK(std::string(unit(Quantity::linear_speed)) == "mm/s");
  CHECK(std::string(unit(Quantity::angular_acceleration)) == "deg/s^2");
  CHECK(std::string(unit(Quantity::linear_acceleration)) == "mm/s^2");
  CHECK(to_user(pi, Quantity::angular_acceleration) == doctest::Approx(180));
  CHECK(to_user(pi, Quantity::linear_acceleration) == pi);
}

TEST_CASE("numbers for people") {
  CHECK(plain(0) == "0");
  CHECK(plain(412) == "412");
  CHECK(plain(-0.0123456) == "-0.01235");
  CHECK(plain(1234.56) == "1234.6");
  CHECK(plain(123456.7) == "123457");
  CHECK(plain(-3.904e-8) == "0");
  CHECK(plain(3.904e-5) == "3.904e-05");
  CHECK(plain(1e20) == "1e+20");
  CHECK(plain(99.99999) == "100");
  CHECK(fixed(-0.00001, 3) == "0");
  CHECK(fixed(2.5, 3) == "2.5");
}

TEST_CASE("a speed that has to hold is never rounded up") {
  CHECK(plain_below(52.37) == "52.3");
  CHECK(plain_below(96.1) == "96.1");
  CHECK(plain_below(1239) == "1230");
  CHECK(plain_below(0.0123456) == "0.0123");
  std::mt19937_64 random(7);
  std::uniform_real_distribution<double> exponent(-3, 4);
  for (int i = 0; i < 10000; ++i) {
    const double value = std::pow(10, exponent(random));
    const double below = std::stod(plain_below(value));
    CAPTURE(value);
    CHECK(below <= value);
    CHECK(below > 0.989 * value);
  }
}

TEST_CASE("a value and its bound are told apart") {
  const Compared near = compared(360.00001, 360, Quantity::length);
  CHECK(near.value == "360.00001 mm");
  CHECK(near.bound == "360 mm");
  CHECK(compared(5, 5, Quantity::pure).value == "5");
}

TEST_CASE("roll, pitch and yaw rebuild the rotation") {
  std::mt19937_64 random(11);
  std::uniform_real_distribution<double> angle(-pi, pi);
  for (int i = 0; i < 1000; ++i) {
    const double pitch = i % 10 == 0 ? std::copysign(pi / 2, angle(random)) : angle(random) / 2;
    const Matrix3 rotation = rotation_from_roll_pitch_yaw(angle(random), pitch, angle(random));
    const Vector3 angles = roll_pitch_yaw(rotation);
    const Matrix3 again = rotation_from_roll_pitch_yaw(angles.x(), angles.y(), angles.z());
    CHECK((again - rotation).cwiseAbs().maxCoeff() < 1e-12);
  }
}
