#include <fmt/format.h>

#include <cmath>

#include "base/near_name.hpp"
#include "base/number_text.hpp"
#include "base/quantity.hpp"
#include "standards/rules.hpp"

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

// Every key a project may write, for "did you mean".
std::vector<std::string> known_keys(const DesignStandard& standard) {
  std::vector<std::string> keys = {"author", "reason"};
  for (const auto& [key, value] : standard.values) {
    keys.push_back(key);
    for (const UnitSuffix& unit : suffixes)
      if (ends_with(key, unit.ours)) keys.push_back(key.substr(0, key.size() - unit.ours.size()) + std::string(unit.theirs));
  }
  for (const auto& [key, truth] : standard.allowed) keys.push_back(key);
  for (const auto& [key, rule] : standard.rounding) keys.push_back("rounding_" + key);
  return keys;
}

class Changer {
 public:
  explicit Changer(DesignStandard standard) : m_base(standard), m_standard(std::move(standard)) {}

  Result<DesignStandard> apply(const std::vector<Change>& changes) {
    for (const Change& change : changes) {
      if (change.number) change_number(change);
      else if (change.truth) change_truth(change);
      else change_word(change);
    }
    for (const std::string& sentence : crossed_limits(m_standard))
      problem(changes.empty() ? m_standard.id : changes.front().where, sentence, "the least not above the most", "Correct one of them");
    require_author();
    if (!m_problems.empty()) return failure(std::move(m_problems));
    return std::move(m_standard);
  }

 private:
  void problem(const std::string& where, std::string found, std::string expected, std::string mend) {
    m_problems.push_back(error(where, std::move(found), std::move(expected), std::move(mend)));
  }
  void unknown(const Change& change) {
    problem(change.where, "unknown key " + printable(change.key), "a key of " + m_standard.id, did_you_mean(change.key, known_keys(m_standard), "Check its spelling and its unit"));
  }

  void change_number(const Change& change) {
    const auto target = target_of(m_standard, change.key);
    if (!target && m_standard.allowed.count(change.key) != 0) return problem(change.where, number_text(*change.number), "true or false", "Correct the value");
    if (!target && m_standard.rounding.count(change.key.substr(0, 9) == "rounding_" ? change.key.substr(9) : "") != 0)
      return problem(change.where, number_text(*change.number), rounding_words(), "Use one of these words");
    if (!target) return unknown(change);
    StandardValue& to = m_standard.values[target->key];
    const double value = *change.number * target->factor;
    const Limits limits = limits_of(target->key, m_base.values.at(target->key));
    const double slack = 1e-6 * std::max(1.0, std::fabs(value));
    if (!(value >= limits.least - slack && value <= limits.most + slack))
      return problem(change.where, number_text(*change.number), fmt::format("{} to {}", number_text(limits.least / target->factor, 2), number_text(limits.most / target->factor, 2)),
                     "Correct the value or its unit");
    if (const auto [first, is_new] = m_set_by.emplace(target->key, &change); !is_new)
      return problem(change.where, fmt::format("{} beside {}", printable(change.key), printable(first->second->key)), "one value in one unit", "Keep one of them");
    to.value = value;
    to.source = "set by the project instead of " + number_text(m_base.values.at(target->key).value, 4) + " (" + m_base.values.at(target->key).source + ")";
    to.overridden = true;
  }

  void change_truth(const Change& change) {
    const auto found = m_standard.allowed.find(change.key);
    if (found != m_standard.allowed.end()) found->second = *change.truth;
    else if (target_of(m_standard, change.key)) problem(change.where, *change.truth ? "true" : "false", "a number", "Write a number without quotes");
    else unknown(change);
  }

  void change_word(const Change& change) {
    const std::string word = change.word.value_or("");
    if (change.key == "author" || change.key == "reason") {
      m_standard.words[change.key] = word;
    } else if (change.key.rfind("rounding_", 0) == 0 && m_standard.rounding.count(change.key.substr(9)) != 0) {
      change_rounding(change, word);
    } else if (target_of(m_standard, change.key)) {
      problem(change.where, "\"" + printable(word) + "\"", "a number", "Write a number without quotes");
    } else if (m_standard.allowed.count(change.key) != 0) {
      problem(change.where, "\"" + printable(word) + "\"", "true or false", "Write it without quotes");
    } else {
      unknown(change);
    }
  }

  void change_rounding(const Change& change, const std::string& word) {
    const std::string key = change.key.substr(9);
    const auto rule = rounding_of(word);
    if (!rule) return problem(change.where, printable(word), rounding_words(), "Use one of these words");
    if (*rule == Rounding::nearest_tenth && key != "yellow_s") return problem(change.where, word, "a rule that never shortens: only yellow may go to the nearest tenth", "Use a rule that goes up");
    if (!is_whole_second_rule(*rule) && needs_whole_seconds(key)) return problem(change.where, word, "up_to_second: controllers take whole seconds here", "Use up_to_second");
    m_standard.rounding[key] = *rule;
  }

  static bool says(const DesignStandard& standard, const char* word) {
    const auto found = standard.words.find(word);
    return found != standard.words.end() && !trim(found->second).empty();
  }

  void require_author() {
    if (says(m_standard, "author") && says(m_standard, "reason")) return;
    for (const auto& [key, change] : m_set_by) {
      const StandardValue& from = m_base.values.at(key);
      if (!is_less_cautious(from, m_standard.values.at(key).value)) continue;
      problem(change->where, fmt::format("{}, which makes intervals shorter than the standard's {} (in SI)", number_text(*change->number), number_text(from.value, 3)),
              "author and reason under [standards]: who takes it on, and why", "Add them, or keep the standard's value");
    }
  }

  const DesignStandard m_base;
  DesignStandard m_standard;
  std::map<std::string, const Change*> m_set_by;  // SI key -> the change that set it
  Diagnostics m_problems;
};

}  // namespace

Result<DesignStandard> with_changes(DesignStandard standard, const std::vector<Change>& changes) { return Changer(std::move(standard)).apply(changes); }

std::vector<std::string> shortened_values(const DesignStandard& changed, const DesignStandard& base) {
  std::vector<std::string> sentences;
  const auto word = [&](const char* key) {
    const auto found = changed.words.find(key);
    return found == changed.words.end() ? std::string() : printable(found->second);
  };
  for (const auto& [key, value] : changed.values) {
    const auto from = base.values.find(key);
    if (from == base.values.end() || !is_less_cautious(from->second, value.value)) continue;
    sentences.push_back(fmt::format("{} {} instead of the standard's {}: intervals get shorter; {} ({})", key, number_text(value.value), number_text(from->second.value), word("reason"), word("author")));
  }
  return sentences;
}

}  // namespace entrain::standards
