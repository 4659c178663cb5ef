#include "coordination/bands/solve.hpp"

#include <algorithm>
#include <cmath>

#include "coordination/bands/joint.hpp"

namespace entrain::bands {
namespace {

void check_whole_seconds(const Compiled& compiled, Diagnostics& found) {
  if (compiled.cycle % ticks_per_second != 0)
    found.push_back(error("cycle", std::to_string(to_seconds(compiled.cycle)), "a whole number of seconds",
                          "Round the cycle, or ask for continuous offsets."));
  for (std::size_t s = 0; s < compiled.stations.size(); ++s)
    if (compiled.cycle % ticks_per_second == 0 && compiled.stations[s].period % ticks_per_second != 0)
      found.push_back(error("station " + std::to_string(s), "half of an odd cycle", "a whole number of seconds",
                            "Run the station at the full cycle or make the cycle even."));
}

double seconds(double ticks) { return ticks / static_cast<double>(ticks_per_second); }

Answer to_answer(const Compiled& compiled, const JointSetting& joint) {
  Answer answer = describe(compiled, joint.setting);
  const std::vector<FrameBand> bands = measure_all(compiled, joint.setting);
  for (std::size_t c = 0; c < answer.corridors.size(); ++c) {
    CorridorAnswer& corridor = answer.corridors[c];
    const Alone& own = joint.own[c];
    const double share = share_of(compiled, static_cast<int>(c), bands);
    corridor.share_s = seconds(share);
    corridor.own_best_share_s = corridor.share_bound_s = seconds(own.share);
    corridor.all_directions = joint.all_directions[c];
    corridor.witness = joint.witness[c];
    for (std::size_t d = 0; d < corridor.directions.size(); ++d)
      corridor.directions[d].bound_s =
          std::max(corridor.directions[d].width_s, to_seconds(d == 0 ? joint.bound[c].first : joint.bound[c].second));
    answer.least_ratio = std::min(answer.least_ratio, ratio_of(share, own));
    if (!corridor.all_directions)
      answer.notes.push_back(
          note("corridor " + std::to_string(c),
               "no offsets give every direction a band at once; the widest band of one direction was taken"));
  }
  answer.least_ratio_bound = joint.least_ratio_bound;
  answer.proved = joint.proved;
  return answer;
}

Result<Answer> solve(const Problem& problem, const Effort& effort, bool whole_seconds) {
  const Result<Compiled> compiled = compile(problem);
  if (!compiled) return failure(compiled.error());
  Diagnostics found;
  if (whole_seconds) check_whole_seconds(*compiled, found);
  if (!found.empty()) return failure(std::move(found));
  return to_answer(*compiled, solve_all(*compiled, std::max<std::int64_t>(1, effort.most_nodes), whole_seconds));
}

Result<Answer> solve(const TwoWayInput& input, bool whole_seconds) {
  const Problem problem = to_problem(input);
  Diagnostics found = check_lengths(input);
  if (!found.empty()) {
    append(found, check(problem));
    return failure(std::move(found));
  }
  return solve(problem, {}, whole_seconds);
}

}  // namespace

Result<Answer> solve_two_way(const TwoWayInput& input) { return solve(input, false); }
Result<Answer> solve_two_way_whole_seconds(const TwoWayInput& input) { return solve(input, true); }
Result<Answer> solve_joint(const Problem& problem, const Effort& effort) { return solve(problem, effort, false); }
Result<Answer> solve_joint_whole_seconds(const Problem& problem, const Effort& effort) {
  return solve(problem, effort, true);
}

}  // namespace entrain::bands
