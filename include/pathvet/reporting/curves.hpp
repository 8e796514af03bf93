#pragma once

#include <cstddef>
#include <vector>

#include "pathvet/checks/check_path.hpp"
#include "pathvet/model/cell.hpp"
#include "pathvet/retiming/recording.hpp"

namespace pathvet {

/// One place on a path's curves. Internal units; length and time count from the path's start.
struct CurveRow {
  int segment = 0;
  double fraction = 0;
  double length = 0;
  double time = 0;
  /// Positions of all axes (as PathResult::axes), then their speeds as signed shares of their limits (0 where
  /// an axis has none), then the smallest singular value. NaN for what has no value.
  std::vector<double> values;
  Vector3 tcp = Vector3::Zero();  ///< mm, world
};

/// Keeps at most about `most_rows` of the rows that it is given. While there are more, neighbouring rows
/// share a bucket, and a bucket keeps its first and last row and, for every value, the row where it is least
/// and the one where it is greatest: whatever is left out lies between rows that stay.
class CurveThinner {
 public:
  explicit CurveThinner(std::size_t most_rows) : most_rows_(most_rows) {}

  /// Rows come in the order of the path; those of one segment may be a few rows late.
  void add(CurveRow row);
  /// What is kept, in the order of the path. Leaves nothing behind.
  [[nodiscard]] std::vector<CurveRow> take();

 private:
  using Bucket = std::vector<CurveRow>;

  static void thin(Bucket& bucket);
  void shrink();
  void count();

  std::size_t most_rows_;
  std::size_t span_ = 16;  // rows that go into a bucket
  std::size_t in_last_ = 0;
  std::size_t closed_rows_ = 0;  // rows in all buckets but the last
  bool thinning_ = false;
  std::vector<Bucket> buckets_;
};

/// What a page draws of one path beside its result.
struct PathCurves {
  Arm arm;
  std::vector<Pose> tools;           ///< of the flange; the last one is none
  std::vector<int> tool_of_segment;  ///< index into `tools`, by segment from 1 (the first entry: segment 1)
  SourcePlace start_place;           ///< of the first waypoint
  std::vector<CurveRow> rows;        ///< in the order of the path
  std::vector<Vector3> waypoints;    ///< positions as tracked, mm, world; NaN where out of reach
};

/// Watches a check and keeps the curves of its path, thinned so that no extreme of any joint is lost.
class CurveCollector : public CheckObserver {
 public:
  /// Values that one report may hold; the paths of a report share them.
  static constexpr std::size_t most_values = 400'000;

  /// `path` and `cell` are kept by reference. `values`: how many the curves may have in all.
  CurveCollector(const Path& path, const Cell& cell, std::size_t values = most_values);

  [[nodiscard]] bool wants_samples() const override { return true; }
  void begin_segment(const SegmentStart& start) override;
  void sample(const TraceSample& sample) override;
  void extreme(const TraceSample& sample) override;

  /// The curves so far. Leaves nothing behind.
  [[nodiscard]] PathCurves take();

 private:
  [[nodiscard]] CurveRow row_of(const TraceSample& sample) const;
  void dwell(int segment);
  void add_still(double time);

  const Path& path_;
  std::vector<RateLimit> limits_;
  PathCurves curves_;
  CurveThinner thinner_;
  double duration_ = 0;  // of the segment
  CurveRow last_;
  std::vector<double> external_begin_, external_change_;  // of all positioner joints over the segment
};

}  // namespace pathvet
