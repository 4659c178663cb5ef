#include <fmt/format.h>

#include <cmath>

#include "base/number_text.hpp"
#include "base/quantity.hpp"
#include "standards/design_standard.hpp"

namespace entrain::standards {
namespace {

struct UnitSuffix {
  std::string_view theirs, ours;
  double factor;
};

constexpr UnitSuffix suffixes[] = {{"_ft_per_s2", "_mps2", metres_per_foot}, {"_m_per_s2", "_mps2", 1},     {"_ft_per_s", "_mps", metres_per_foot}, {"_m_per_s", "_mps", 1},
                                   {"_mph", "_mps", mps_per_mph},            {"_km_h", "_mps", mps_per_kph}, {"_ft", "_m", metres_per_foot}};

bool ends_with(std::string_view text, std::string_view end) { return text.size() > end.size() && text.substr(text.size() - end.size()) == end; }

struct Target {
  std::string key;
  double factor = 1;
};

// The standard's key behind the project's, which may carry another unit.
std::optional<Target> target_of(const DesignStandard& standard, const std::string& key) {
  if (standard.values.count(key) != 0) return Target{key, 1};
  for (const UnitSuffix& unit : suffixes) {
    if (!ends_with(key, unit.theirs)) continue;
    const std::string si = key.substr(0, key.size() - unit.theirs.size()) + std::string(unit.ours);
    if (standard.values.count(si) != 0) return Target{si, unit.factor};
  }
  return std::nullopt;
}

struct Limits {
  double least, most;
};

Limits limits_of(const std::string& key) {
  if (ends_with(key, "_margin_mps")) return {-20, 20};
  if (key == "target_saturation") return {0.3, 1.5};
  if (ends_with(key, "_mps2")) return {0.1, 10};
  if (ends_with(key, "_mps")) return {0.1, 60};
  if (ends_with(key, "_m")) return {0, 100};
  if (ends_with(key, "_s")) return {0, 300};
  if (ends_with(key, "_vph")) return {100, 5000};
  return {0, 1000};
}

void change_number(DesignStandard& standard, const Change& change, Diagnostics& problems) {
  const auto target = target_of(standard, change.key);
  if (!target) {
    problems.push_back(error(change.where, change.key, "a key of " + standard.id, "Check its spelling and its unit"));
    return;
  }
  const double value = *change.number * target->factor;
  const Limits limits = limits_of(target->key);
  if (!(value >= limits.least && value <= limits.most)) {
    problems.push_back(error(change.where, number_text(*change.number), fmt::format("{} to {}", number_text(limits.least / target->factor), number_text(limits.most / target->factor)),
                             "Correct the value or its unit"));
    return;
  }
  StandardValue& to = standard.values[target->key];
  to = {value, "set by the project instead of " + number_text(to.value, 4) + " (" + to.source + ")", true};
}

}  // namespace

Result<DesignStandard> with_changes(DesignStandard standard, const std::vector<Change>& changes) {
  Diagnostics problems;
  for (const Change& change : changes) {
    if (change.number) change_number(standard, change, problems);
    else if (change.truth && standard.allowed.count(change.key) != 0) standard.allowed[change.key] = *change.truth;
    else problems.push_back(error(change.where, change.word.value_or(change.key), "a key of " + standard.id + " with a number", "Check its spelling"));
  }
  if (!problems.empty()) return failure(std::move(problems));
  return standard;
}

}  // namespace entrain::standards
