#include "coordination/bands/evaluate.hpp"

#include <cmath>

#include "coordination/bands/compiled.hpp"
#include "coordination/bands/measure.hpp"

namespace entrain::bands {
namespace {

Diagnostics check_setting(const Problem& problem, const std::vector<int>& options,
                          const std::vector<double>& offsets_s) {
  Diagnostics found;
  const std::string count = std::to_string(problem.stations.size());
  if (options.size() != problem.stations.size())
    found.push_back(
        error("options", std::to_string(options.size()), count + ", one a station", "Give every station an option."));
  if (offsets_s.size() != problem.stations.size())
    found.push_back(
        error("offsets", std::to_string(offsets_s.size()), count + ", one a station", "Give every station an offset."));
  for (std::size_t i = 0; i < options.size() && i < problem.stations.size(); ++i)
    if (options[i] < 0 || options[i] >= problem.stations[i].option_count)
      found.push_back(error("option of station " + std::to_string(i), std::to_string(options[i]),
                            "an index below " + std::to_string(problem.stations[i].option_count),
                            "Choose an option that the station has."));
  for (std::size_t i = 0; i < offsets_s.size(); ++i)
    if (!(std::abs(offsets_s[i]) <= 1e6))
      found.push_back(error("offset of station " + std::to_string(i), std::to_string(offsets_s[i]),
                            "a finite number of seconds", "Give the offset in seconds."));
  return found;
}

}  // namespace

Result<Answer> evaluate_bands(const Problem& problem, const std::vector<int>& options,
                              const std::vector<double>& offsets_s) {
  Diagnostics found = check_setting(problem, options, offsets_s);
  const Result<Compiled> compiled = compile(problem);
  if (!compiled) append(found, compiled.error());
  if (!found.empty()) return failure(std::move(found));
  Setting setting{options, {}};
  for (std::size_t i = 0; i < offsets_s.size(); ++i)
    setting.offsets.push_back(wrap(to_ticks(offsets_s[i]), compiled->stations[i].period));
  Answer answer = describe(*compiled, setting);
  const std::vector<FrameBand> bands = measure_all(*compiled, setting);
  for (std::size_t c = 0; c < answer.corridors.size(); ++c)
    answer.corridors[c].share_s =
        share_of(*compiled, static_cast<int>(c), bands) / static_cast<double>(ticks_per_second);
  return answer;
}

Result<Answer> evaluate_bands(const TwoWayInput& input, const std::vector<int>& options,
                              const std::vector<double>& offsets_s) {
  const Problem problem = to_problem(input);
  Diagnostics found = check_lengths(input);
  if (!found.empty()) {
    append(found, check(problem));
    return failure(std::move(found));
  }
  return evaluate_bands(problem, options, offsets_s);
}

Result<std::vector<std::vector<OffsetArc>>> admissible_offsets(const Problem& problem, int corridor, int direction,
                                                               const std::vector<int>& options, double width_s) {
  Diagnostics found = check_setting(problem, options, std::vector<double>(problem.stations.size(), 0.0));
  const Result<Compiled> compiled = compile(problem);
  if (!compiled) append(found, compiled.error());
  if (corridor < 0 || static_cast<std::size_t>(corridor) >= problem.corridors.size() || direction < 0 ||
      static_cast<std::size_t>(direction) >= problem.corridors[static_cast<std::size_t>(corridor)].directions.size())
    found.push_back(error("corridor " + std::to_string(corridor) + ", direction " + std::to_string(direction),
                          "not in the problem", "one of its directions", "Name a direction of the problem."));
  if (!(width_s >= 0) || !(width_s <= problem.cycle_s))
    found.push_back(error("width", std::to_string(width_s), "0 to the cycle", "Give the width in seconds."));
  if (!found.empty()) return failure(std::move(found));
  const Tick width = to_ticks(width_s);
  const int frame = compiled->corridors[static_cast<std::size_t>(corridor)][static_cast<std::size_t>(direction)];
  std::vector<std::vector<OffsetArc>> arcs;
  for (const StopKey& stop : compiled->frames[static_cast<std::size_t>(frame)].stops) {
    const auto station = static_cast<std::size_t>(stop.station);
    const Visit& visit = compiled->stations[station].visits[static_cast<std::size_t>(stop.visit)];
    const Tick period = compiled->stations[station].period;
    arcs.emplace_back();
    for (const Slot& slot : visit.slots[static_cast<std::size_t>(options[station])]) {
      const Tick spare = slot.duration - width;
      if (slot.open || spare >= period)
        arcs.back().push_back({0, to_seconds(period), true});
      else if (spare >= 0)
        arcs.back().push_back({to_seconds(wrap(visit.shift - slot.start - spare, period)), to_seconds(spare), false});
    }
  }
  return arcs;
}

}  // namespace entrain::bands
