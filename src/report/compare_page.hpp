// The comparison of cycle lengths: terminal table, CSV, JSON and a page with a plot of bands and delay over the cycle.
#pragma once

#include <string>
#include <vector>

#include "report/document.hpp"

namespace entrain::report {

struct CompareBand {
  std::string corridor, direction;
  double bandwidth_s = 0, efficiency = 0, attainability = 0;
};

struct CompareRow {
  double cycle_s = 0;
  bool existing = false;               // the timing that runs today
  bool fits = false;                   // every minimum fits
  std::string why_not;                 // where it does not
  std::vector<CompareBand> bands;      // one a corridor direction, the same order in every row that fits
  double delay_s = 0;                  // a vehicle
  double stops_per_h = 0;
  double worst_degree = 0;             // of saturation
  std::string worst_degree_at;
  double longest_pedestrian_wait_s = 0, longest_side_street_wait_s = 0;
  bool recommended = false, runner_up = false;
};

struct Comparison {
  std::string project, period;
  std::string reason;                  // why the recommended cycle, and what is second best
  std::vector<CompareRow> rows;
};

Table compare_table(const Comparison& comparison);

// Bands above, delay below, over the cycle length; every line is named at its end and differs by dash and mark, not by colour.
Drawing compare_plot(const Comparison& comparison);

// For the terminal, one table a period with its reason.
std::string compare_text(const std::vector<Comparison>& comparisons);

// {"project": ..., "periods": [{"period", "reason", "recommended_cycle_s", "runner_up_cycle_s", "rows": [...]}]}; rows that do not fit
// carry "why_not" and no figures. Ends with a line end.
std::string compare_json(const std::vector<Comparison>& comparisons);

// compare.html, and compare_PERIOD.csv for every period.
std::vector<OutputFile> compare_files(const std::vector<Comparison>& comparisons);

}  // namespace entrain::report
