#include "pathvet/reporting/trace.hpp"

#include <doctest/doctest.h>

#include <cmath>
#include <sstream>

#include "pathvet/model/units.hpp"

using namespace pathvet;

namespace {

Arm two_joints() {
  Arm arm;
  arm.joints.resize(2);
  arm.joints[0].name = "slide, long";
  arm.joints[0].type = JointType::prismatic;
  arm.joints[1].name = "J\"2\"";
  return arm;
}

}  // namespace

TEST_CASE("the trace is CSV, with names quoted where they have to be") {
  const Arm arm = two_joints();
  std::ostringstream out;
  TraceWriter writer(arm, out);
  CHECK(out.str().empty());
  const JointVector joints = (JointVector(2) << -0.0, pi / 2).finished();
  const JointVector speeds = (JointVector(2) << 0.1, NAN).finished();
  const std::string branch = "+";
  const Pose tcp;
  writer.write({1, 0.25, 1.0 / 3, 1e-7, joints, speeds, 0.5, branch, 2.5e-9, pi, tcp});
  writer.write({2, 1, 2, 3, joints, speeds, NAN, branch, 0, 0, tcp});
  CHECK(out.str() ==
        "segment,fraction,length_mm,time_s,\"slide, long\",\"J\"\"2\"\"\",\"slide, "
        "long_speed\",\"J\"\"2\"\"_speed\","
        "min_singular_value,branch,position_residual_mm,orientation_residual_deg\n"
        "1,0.25,0.3333333333333333,1e-07,0,90,0.1,,0.5,+,2.5e-09,180\n"
        "2,1,2,3,0,90,0.1,,,+,0,0\n");
}
