// A band of its own for every link: both ends' windows hold it, its middle runs along one line of travel through the
// whole corridor (N. H. Gartner, S. F. Assmann, F. Lasaga, D. L. Hou, Transportation Research B 25(1), 1991). Weighted
// by link and direction.
//
// With phi the forward line minus the backward line, a station offers half widths (a, b) of the two directions with a
// <= g/2, b <= h/2, a + b <= (g + h)/2 - |distance of the middles of its windows on the circle|. For given phi and
// options the best half widths along the chain follow exactly from one pass of concave functions; phi is searched,
// options by dynamic programming on a grid of half widths.
#pragma once

#include <vector>

#include "base/result.hpp"
#include "coordination/bands/model.hpp"

namespace entrain::bands {

struct LinkBandInput {
  TwoWayInput corridor;  // two directions; its weights and fixed offsets are not looked at, fixed options are
  std::vector<double> forward_weights, backward_weights;  // by link, 0 or more
};

struct LinkBandAnswer {
  double value_s = 0;  // sum of weight * width over links and directions
  std::vector<int> options;
  std::vector<double> offsets_s;
  std::vector<double> forward_s, backward_s;       // widths by link
  double forward_line_s = 0, backward_line_s = 0;  // system time of each line at the first station
  bool has_lines = true;  // false: no two lines of travel meet only open windows; all widths are 0
};

// Continuous offsets. For the options chosen the widths are the best at the phi found (phi to 1e-9 s in its stretch);
// other options or another stretch of phi that the grid ranked lower may still be better: no proof.
[[nodiscard]] Result<LinkBandAnswer> solve_link_bands(const LinkBandInput& input);
// Offsets in whole seconds: the continuous ones rounded, improved one by one.
[[nodiscard]] Result<LinkBandAnswer> solve_link_bands_whole_seconds(const LinkBandInput& input);
// The best lines for given options and offsets.
[[nodiscard]] Result<LinkBandAnswer> evaluate_link_bands(const LinkBandInput& input, const std::vector<int>& options,
                                                         const std::vector<double>& offsets_s);

}  // namespace entrain::bands
