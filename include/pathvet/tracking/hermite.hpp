#pragma once

#include "pathvet/tracking/step.hpp"

namespace pathvet {

/// Quintic Hermite interpolation of a step at t from values, first and second derivatives at its ends.
void interpolate(const Step& step, double t, Node& out);

}  // namespace pathvet
