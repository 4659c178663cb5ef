#include "standards/rules.hpp"

#include <fmt/format.h>

#include <cmath>

#include "base/number_text.hpp"

namespace entrain::standards {
namespace {

struct RoundingWord {
  std::string_view word;
  Rounding rule;
};

constexpr RoundingWord rounding_list[] = {{"up_to_second", Rounding::up_to_second},
                                          {"up_to_half_second", Rounding::up_to_half_second},
                                          {"up_to_tenth", Rounding::up_to_tenth},
                                          {"nearest_tenth", Rounding::nearest_tenth}};

Limits limits_by_unit(std::string_view key) {
  const auto ends = [&](std::string_view end) { return key.size() > end.size() && key.substr(key.size() - end.size()) == end; };
  if (ends("_margin_mps")) return {-20, 20};
  if (ends("_mps2")) return {0.1, 10};
  if (ends("_mps")) return {0.1, 60};
  if (ends("_m")) return {0, 100};
  if (ends("_s")) return {0, 300};
  if (ends("_vph")) return {100, 5000};
  return {0, 1000};
}

}  // namespace

Limits limits_of(const std::string& key, const StandardValue& value) {
  const Limits unit = limits_by_unit(key);
  return {value.least.value_or(unit.least), value.most.value_or(unit.most)};
}

std::optional<Rounding> rounding_of(std::string_view word) {
  for (const RoundingWord& known : rounding_list)
    if (known.word == word) return known.rule;
  return std::nullopt;
}

std::string rounding_words() {
  std::string all;
  for (const RoundingWord& known : rounding_list) all += (all.empty() ? "" : ", ") + std::string(known.word);
  return "one of " + all;
}

std::vector<std::string> crossed_limits(const DesignStandard& standard) {
  std::vector<std::string> sentences;
  for (const char* stem : {"yellow", "red_clearance"}) {
    const auto least = standard.values.find(fmt::format("{}_min_s", stem)), most = standard.values.find(fmt::format("{}_max_s", stem));
    if (least == standard.values.end() || most == standard.values.end() || least->second.value <= most->second.value) continue;
    sentences.push_back(fmt::format("{} {} above {} {}", least->first, number_text(least->second.value), most->first, number_text(most->second.value)));
  }
  return sentences;
}

bool is_less_cautious(const StandardValue& from, double to) {
  const double slack = 1e-3 * std::max(1.0, std::fabs(from.value));  // units printed with three digits are the same value
  if (from.cautious == "higher") return to < from.value - slack;
  return from.cautious == "lower" && to > from.value + slack;
}

}  // namespace entrain::standards
