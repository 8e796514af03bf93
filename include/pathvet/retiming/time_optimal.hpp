#pragma once

#include <vector>

namespace pathvet {

/// A curve of several axes on a grid of its parameter, with what limits the axes. Between two grid points the
/// curve's first derivative is the cubic through the first and second derivatives at both.
struct SpeedGrid {
  std::size_t axes = 0;
  std::vector<double> parameter;  ///< ascending; two points at one place where the second derivative jumps
  std::vector<double> first;      ///< by the parameter; axis k at point i is [i * axes + k]
  std::vector<double> second;
  std::vector<double> ceiling;       ///< greatest rate of the parameter at each point, 1/s; infinite: none
  std::vector<double> speed;         ///< of each axis; infinite where there is none
  std::vector<double> acceleration;  ///< likewise

  [[nodiscard]] std::size_t points() const { return parameter.size(); }
};

/// How fast a grid is run through.
struct PathSpeed {
  std::vector<double> square;  ///< of the parameter's rate at each grid point, 1/s^2; straight in between
  std::vector<double> acceleration;  ///< of the parameter on each interval, 1/s^2; 0 on those without length
  std::vector<double> time;          ///< s from the first point to each

  [[nodiscard]] double duration() const { return time.empty() ? 0.0 : time.back(); }
};

/// Time-optimal path parameterisation by reachability (Pham & Pham 2018): on each interval the parameter's
/// acceleration is constant. The backward pass finds the greatest squared rate at each point from which the
/// rest can be done, by an exact two-variable linear program a point; the forward pass takes the greatest
/// acceleration. Limits hold between the grid points too. At rest at the begin and end if asked for. Cost:
/// linear in the number of points. Precondition: two points or more. docs/retiming.md, "Time-optimal
/// profile".
[[nodiscard]] PathSpeed time_optimal_speed(const SpeedGrid& grid, bool rest_at_begin, bool rest_at_end);

/// By how much the profile exceeds a limit between or at the grid points, as a share of the limit (0:
/// nowhere), looked for at `places` places of each interval on the curve's cubics.
[[nodiscard]] double greatest_excess(const SpeedGrid& grid, const PathSpeed& speed, int places);

}  // namespace pathvet
