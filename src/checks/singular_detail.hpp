#pragma once

#include "pathvet/checks/finding.hpp"
#include "pathvet/tracking/follower.hpp"

namespace pathvet {

/// What is singular at a configuration: kind by the branch factor that is nearest to zero, nearness in the
/// arm's own measure, and the singular vectors of the smallest singular value.
[[nodiscard]] SingularDetail singular_detail(const ArmContext& context, const JointVector& q);

}  // namespace pathvet
