// The widest band of every direction for given options and offsets, by interval arithmetic alone.
#pragma once

#include "base/result.hpp"
#include "coordination/bands/model.hpp"

namespace entrain::bands {

// `options` and `offsets_s` by station. Fixed options and offsets of the input are not looked at. Bounds are left 0.
// Several equally wide bands: the one whose leading edge passes the first stop earliest in [0, cycle).
[[nodiscard]] Result<Answer> evaluate_bands(const TwoWayInput& input, const std::vector<int>& options,
                                            const std::vector<double>& offsets_s);
[[nodiscard]] Result<Answer> evaluate_bands(const Problem& problem, const std::vector<int>& options,
                                            const std::vector<double>& offsets_s);

// Where the offset of a stop's station may lie so that a band of the given width fits, relative to the time at which
// the band's leading edge passes the direction's first stop: offset - edge in [start_s, start_s + length_s] modulo the
// station's period, closed.
struct OffsetArc {
  double start_s = 0, length_s = 0;
  bool everywhere = false;
};
// By stop of the direction, one arc for each window wide enough. For a station met twice intersect the arcs of its
// stops.
[[nodiscard]] Result<std::vector<std::vector<OffsetArc>>> admissible_offsets(const Problem& problem, int corridor,
                                                                             int direction,
                                                                             const std::vector<int>& options,
                                                                             double width_s);

}  // namespace entrain::bands
