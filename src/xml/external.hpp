#pragma once

#include <vector>

#include "pathvet/model/cell.hpp"
#include "xml/document.hpp"

namespace pathvet::xml {

/// The joint values of the positioners from waypoint to waypoint: what one leaves out holds on, zeros at
/// first.
class External {
 public:
  /// Without a cell, only what can be said without it is checked.
  explicit External(const Cell* cell);
  /// The values at a waypoint, one vector a positioner (none without a cell).
  std::vector<JointVector> read(const Element& waypoint, bool first);

 private:
  void read_one(const Element& element, std::vector<bool>& given);
  void check_start(const Element& waypoint, const std::vector<bool>& given) const;

  const Cell* cell_;
  std::vector<JointVector> values_;
};

}  // namespace pathvet::xml
