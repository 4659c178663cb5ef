// What a band bears when station clocks are off.
#pragma once

#include <vector>

namespace entrain::bands {

// A station's window in the platoon's frame: the band is [max left, min right]. All from one evaluation, on one line,
// not wrapped.
struct FrameWindow {
  double left_s = 0, right_s = 0;
};

// Width that is left whatever the clocks do within +-error_s[v]: max(0, min(min_v (R_v - L_v), min_{i != j} [(R_i -
// e_i) - (L_j + e_j)])).
double guaranteed_band(const std::vector<FrameWindow>& windows, const std::vector<double>& error_s);

struct Bearable {
  double early_s = 0, late_s = 0;  // infinite where the station stands alone
};
// How far each station's clock alone may be off before the band loses `loss_s`, by station.
std::vector<Bearable> bearable_errors(const std::vector<FrameWindow>& windows, double loss_s);

}  // namespace entrain::bands
