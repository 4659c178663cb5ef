#include <fmt/format.h>

#include <cassert>
#include <cmath>
#include <toml++/toml.h>

#include "standards/design_standard.hpp"

namespace entrain::standards {
namespace {

struct Reader {
  const std::string& file;
  DesignStandard standard;
  Diagnostics problems;

  std::string where(const toml::node& node, std::string_view key) const { return fmt::format("{} line {}, {}", file, node.source().begin.line, key); }
  void problem(const toml::node& node, std::string_view key, const char* found, const char* expected) {
    problems.push_back(error(where(node, key), found, expected, "Correct the design standard"));
  }

  const toml::table* part(const toml::table& top, const char* name) {
    const toml::node* node = top.get(name);
    if (node != nullptr && node->is_table()) return node->as_table();
    problems.push_back(error(file, fmt::format("no table [{}]", name), "that table", "Correct the design standard"));
    return nullptr;
  }

  void read_value(std::string_view key, const toml::node& node) {
    const toml::table* table = node.as_table();
    const auto value = table != nullptr ? (*table)["value"].value<double>() : std::nullopt;
    const auto source = table != nullptr ? (*table)["source"].value<std::string>() : std::nullopt;
    if (!value || !std::isfinite(*value)) return problem(node, key, "no finite value", "{ value = ..., source = \"...\" }");
    if (!source || source->empty()) return problem(node, key, "a value without its source", "{ value = ..., source = \"...\" }");
    standard.values[std::string(key)] = {*value, *source, false};
  }

  void read_rounding(std::string_view key, const toml::node& node) {
    static const std::map<std::string, Rounding> words = {{"up_to_second", Rounding::up_to_second},
                                                          {"up_to_tenth", Rounding::up_to_tenth},
                                                          {"nearest_tenth", Rounding::nearest_tenth},
                                                          {"up_to_half_second", Rounding::up_to_half_second}};
    const auto found = words.find(node.value<std::string>().value_or(""));
    if (found == words.end()) return problem(node, key, "an unknown rounding rule", "up_to_second, up_to_tenth, nearest_tenth or up_to_half_second");
    standard.rounding[std::string(key)] = found->second;
  }

  void read_allowed(std::string_view key, const toml::node& node) {
    if (const auto truth = node.value_exact<bool>()) standard.allowed[std::string(key)] = *truth;
    else problem(node, key, "no truth value", "true or false");
  }

  void require_keys() {
    for (const std::string& key : required_keys())
      if (standard.values.count(key) == 0) problems.push_back(error(file + " [values]", "no key " + key, "every standard to hold it", "Add the value with its source"));
    for (const char* key : {"yellow_s", "red_clearance_s", "walk_s", "pedestrian_clearance_s", "minimum_green_s"})
      if (standard.rounding.count(key) == 0) problems.push_back(error(file + " [rounding]", fmt::format("no key {}", key), "a rounding rule for it", "Add the rule"));
  }
};

}  // namespace

const std::vector<std::string>& required_keys() {
  static const std::vector<std::string> keys = {
      "perception_s", "deceleration_mps2", "yellow_min_s", "yellow_max_s", "vehicle_length_m", "red_clearance_reduction_s", "red_clearance_min_s", "red_clearance_max_s",
      "walking_speed_mps", "walking_speed_total_mps", "curb_setback_m", "walk_min_s", "pedestrian_buffer_s", "minimum_green_major_fast_s", "minimum_green_major_s",
      "minimum_green_minor_s", "minimum_green_collector_s", "minimum_green_left_s", "minimum_green_queue_base_s", "minimum_green_queue_each_s", "bicycle_speed_mps",
      "bicycle_acceleration_mps2", "bicycle_perception_s", "bicycle_length_m", "base_saturation_flow_vph", "start_up_lost_s", "end_gain_s", "heavy_vehicle_equivalent",
      "target_saturation", "protected_turn_lanes", "protected_opposing_lanes", "protected_speed_mps", "dispersion_alpha", "dispersion_beta", "stop_weight_s"};
  return keys;
}

double DesignStandard::value(std::string_view key) const {
  const auto found = values.find(std::string(key));
  assert(found != values.end());
  return found == values.end() ? 0 : found->second.value;
}

bool DesignStandard::allows(std::string_view yield) const {
  const auto found = allowed.find(std::string(yield));
  return found != allowed.end() && found->second;
}

Result<DesignStandard> read_standard(std::string_view toml_text, const std::string& file) {
  toml::table top;
  try {
    top = toml::parse(toml_text, std::string_view(file));
  } catch (const toml::parse_error& problem) {
    return failure(error(fmt::format("{} line {}", file, problem.source().begin.line), printable(std::string(problem.description())), "a design standard in TOML", "Mend the text there"));
  }
  Reader reader{file, {}, {}};
  reader.standard.id = top["id"].value<std::string>().value_or("");
  reader.standard.title = top["title"].value<std::string>().value_or("");
  if (reader.standard.id.empty()) reader.problems.push_back(error(file, "no id", "a short name", "Add id = \"...\""));
  if (const auto* values = reader.part(top, "values"))
    for (const auto& [key, node] : *values) reader.read_value(key.str(), node);
  if (const auto* rounding = reader.part(top, "rounding"))
    for (const auto& [key, node] : *rounding) reader.read_rounding(key.str(), node);
  if (const auto* allowed = reader.part(top, "allowed"))
    for (const auto& [key, node] : *allowed) reader.read_allowed(key.str(), node);
  reader.require_keys();
  if (!reader.problems.empty()) return failure(std::move(reader.problems));
  return std::move(reader.standard);
}

}  // namespace entrain::standards
