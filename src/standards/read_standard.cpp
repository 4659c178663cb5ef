#include <fmt/format.h>

#include <algorithm>
#include <cassert>
#include <cmath>
#include <set>
#include <toml++/toml.h>

#include "base/near_name.hpp"
#include "base/number_text.hpp"
#include "base/quantity.hpp"
#include "standards/rules.hpp"

namespace entrain::standards {
namespace {

class Reader {
 public:
  Reader(const std::string& file, const toml::table& top) : m_file(file), m_top(top) {}

  Result<DesignStandard> read() {
    m_standard.id = m_top["id"].value<std::string>().value_or("");
    m_standard.title = m_top["title"].value<std::string>().value_or("");
    if (m_standard.id.empty()) m_problems.push_back(error(m_file, "no id", "a short name", "Add id = \"...\""));
    each("values", true, [&](std::string_view key, const toml::node& node) { read_value(key, node); });
    each("rounding", true, [&](std::string_view key, const toml::node& node) { read_rounding(key, node); });
    each("allowed", true, [&](std::string_view key, const toml::node& node) { read_allowed(key, node); });
    each("words", false, [&](std::string_view key, const toml::node& node) { read_word(key, node); });
    each("clearing", false, [&](std::string_view key, const toml::node& node) { read_clearing(key, node); });
    read_yellow_steps();
    require_keys();
    check_pairs();
    check_unknown();
    if (!m_problems.empty()) return failure(std::move(m_problems));
    return std::move(m_standard);
  }

 private:
  std::string where(const toml::node& node, std::string_view key) const { return fmt::format("{} line {}, {}", m_file, node.source().begin.line, printable(std::string(key))); }
  void problem(const toml::node& node, std::string_view key, std::string found, std::string expected) {
    m_problems.push_back(error(where(node, key), std::move(found), std::move(expected), "Correct the design standard"));
  }

  template <class Use>
  void each(const char* name, bool required, Use use) {
    const toml::node* node = m_top.get(name);
    if (node != nullptr && node->is_table()) {
      for (const auto& [key, inner] : *node->as_table()) m_named.insert(fmt::format("{}.{}", name, key.str())), use(key.str(), inner);
    } else if (node != nullptr || required) {
      m_problems.push_back(error(m_file, fmt::format("no table [{}]", name), "that table", "Correct the design standard"));
    }
  }

  // A finite number under `name` of `table`, or nothing.
  static std::optional<double> number(const toml::table* table, std::string_view name) {
    const toml::node* node = table != nullptr ? table->get(name) : nullptr;
    const auto value = node != nullptr && node->is_number() ? node->value<double>() : std::nullopt;
    return value && std::isfinite(*value) ? value : std::nullopt;
  }
  static std::string text(const toml::table* table, std::string_view name) {
    const toml::node* node = table != nullptr ? table->get(name) : nullptr;
    return node != nullptr ? node->value<std::string>().value_or("") : std::string();
  }

  void read_value(std::string_view key, const toml::node& node) {
    const toml::table* table = node.as_table();
    const auto value = number(table, "value");
    const std::string source = text(table, "source");
    if (!value) return problem(node, key, "no finite value", "{ value = ..., source = \"...\" }");
    if (source.empty()) return problem(node, key, "a value without its source", "{ value = ..., source = \"...\" }");
    StandardValue& to = m_standard.values[std::string(key)];
    to = {*value, source, false, number(table, "least"), number(table, "most"), text(table, "cautious")};
    const Limits limits = limits_of(std::string(key), to);
    if (!(*value >= limits.least && *value <= limits.most))
      problem(node, key, number_text(*value), fmt::format("{} to {}", number_text(limits.least), number_text(limits.most)));
    if (!to.cautious.empty() && to.cautious != "higher" && to.cautious != "lower") problem(node, key, "cautious = \"" + printable(to.cautious) + "\"", "higher or lower");
  }

  void read_rounding(std::string_view key, const toml::node& node) {
    const auto rule = rounding_of(node.value<std::string>().value_or(""));
    if (!rule) return problem(node, key, "an unknown rounding rule", rounding_words());
    if (*rule == Rounding::nearest_tenth && key != "yellow_s") return problem(node, key, "a rule that may shorten the value", "a rule that goes up: only yellow may go to the nearest tenth");
    if (!is_whole_second_rule(*rule) && needs_whole_seconds(key)) return problem(node, key, "a rule that leaves parts of a second", "up_to_second: controllers take whole seconds here");
    m_standard.rounding[std::string(key)] = *rule;
  }

  void read_allowed(std::string_view key, const toml::node& node) {
    if (const auto truth = node.value_exact<bool>()) m_standard.allowed[std::string(key)] = *truth;
    else problem(node, key, "no truth value", "true or false");
  }

  void read_word(std::string_view key, const toml::node& node) {
    if (const auto word = node.value_exact<std::string>()) m_standard.words[std::string(key)] = *word;
    else problem(node, key, "no word", "a text in quotes");
  }

  void read_clearing(std::string_view key, const toml::node& node) {
    const toml::table* table = node.as_table();
    const auto passing = number(table, "passing_s"), clearing = number(table, "clearing_mps"), length = number(table, "length_m"), entering = number(table, "entering_mps");
    const std::string source = text(table, "source");
    const bool sound = passing && clearing && length && entering && *passing >= 0 && *passing <= 20 && *clearing >= 0.3 && *length >= 0 && *length <= 100 && *entering >= 0.3;
    if (!sound) return problem(node, key, "no sound clearing rule", "passing_s, clearing_mps, length_m, entering_mps, speeds above 0");
    if (source.empty()) return problem(node, key, "a rule without its source", "source = \"...\"");
    m_standard.clearing[std::string(key)] = {*passing, *clearing, *length, *entering, source};
  }

  void read_yellow_steps() {
    const toml::node* node = m_top.get("yellow_step");
    if (node == nullptr) return;
    const toml::array* steps = node->as_array();
    if (steps == nullptr || !steps->is_array_of_tables()) return problem(*node, "yellow_step", "no list of tables", "[[yellow_step]] with up_to_km_h, yellow_s, source");
    for (const toml::node& one : *steps) {
      const auto speed = number(one.as_table(), "up_to_km_h"), yellow = number(one.as_table(), "yellow_s");
      const std::string source = text(one.as_table(), "source");
      if (!speed || !yellow || source.empty() || !(*yellow >= 3 && *yellow <= 10)) {
        problem(one, "yellow_step", "no sound step", "up_to_km_h, yellow_s of 3 to 10, source");
        continue;
      }
      const YellowStep step{*speed * mps_per_kph, *yellow, source};
      if (!m_standard.yellow_steps.empty() && (step.up_to_mps <= m_standard.yellow_steps.back().up_to_mps || step.yellow_s < m_standard.yellow_steps.back().yellow_s))
        problem(one, "yellow_step", "a step out of order", "speeds ascending, yellow not shorter at a higher speed");
      m_standard.yellow_steps.push_back(step);
    }
  }

  void require_keys() {
    for (const std::string& key : required_keys())
      if (m_named.count("values." + key) == 0) m_problems.push_back(error(m_file + " [values]", "no key " + key, "every standard to hold it", "Add the value with its source"));
    for (const char* key : {"yellow_s", "red_clearance_s", "walk_s", "pedestrian_clearance_s", "minimum_green_s"})
      if (m_named.count(fmt::format("rounding.{}", key)) == 0) m_problems.push_back(error(m_file + " [rounding]", fmt::format("no key {}", key), "a rounding rule for it", "Add the rule"));
  }

  void check_pairs() {
    for (const std::string& sentence : crossed_limits(m_standard)) m_problems.push_back(error(m_file + " [values]", sentence, "the least not above the most", "Correct the design standard"));
  }

  void check_unknown() {
    static const std::vector<std::string> known = {"id", "title", "values", "rounding", "allowed", "words", "clearing", "yellow_step"};
    for (const auto& [key, node] : m_top)
      if (std::find(known.begin(), known.end(), key.str()) == known.end())
        m_problems.push_back(error(where(node, key.str()), "an unknown part", "one of [values], [rounding], [allowed], [words], [clearing], [[yellow_step]]",
                                   did_you_mean(key.str(), known, "Remove it")));
  }

  const std::string& m_file;
  const toml::table& m_top;
  DesignStandard m_standard;
  std::set<std::string> m_named;  // "values.walk_min_s": what is there, sound or not
  Diagnostics m_problems;
};

}  // namespace

const std::vector<std::string>& required_keys() {
  static const std::vector<std::string> keys = {
      "perception_s", "deceleration_mps2", "yellow_min_s", "yellow_max_s", "vehicle_length_m", "red_clearance_reduction_s", "red_clearance_min_s", "red_clearance_max_s",
      "walking_speed_mps", "walking_speed_total_mps", "curb_setback_m", "walk_min_s", "walk_limit_s", "pedestrian_buffer_s", "minimum_green_major_fast_s",
      "minimum_green_major_s", "minimum_green_minor_s", "minimum_green_collector_s", "minimum_green_left_s", "minimum_green_queue_base_s", "minimum_green_queue_each_s",
      "bicycle_speed_mps", "bicycle_acceleration_mps2", "bicycle_perception_s", "bicycle_length_m", "base_saturation_flow_vph", "start_up_lost_s", "end_gain_s",
      "heavy_vehicle_equivalent", "target_saturation", "queue_headway_s", "vehicle_spacing_m", "turn_clearing_speed_mps", "turn_entry_speed_mps", "protected_turn_lanes",
      "protected_opposing_lanes", "protected_speed_mps", "dispersion_alpha", "dispersion_beta", "stop_weight_s"};
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
  return Reader(file, top).read();
}

}  // namespace entrain::standards
