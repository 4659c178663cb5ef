#include "review/review_text.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <nlohmann/json.hpp>

#include "base/diagnostic.hpp"
#include "base/number_text.hpp"

namespace entrain::review {
namespace {

std::string line_of(const Finding& f) {
  std::string text = fmt::format("{}: {}: {}{}", word(f.severity), f.rule, f.signal.empty() ? "" : printable(f.signal) + ": ", printable(f.sentence, 2000));
  if (!f.mend.empty()) text += ". " + printable(f.mend, 500);
  return text + "\n";
}

std::string pinch_text(const BandCheck& band) {
  std::string lead, trail, gain;
  for (const StopSlack& s : band.stops) {
    if (s.pinches_lead) lead += (lead.empty() ? "" : ", ") + s.signal;
    if (s.pinches_trail) trail += (trail.empty() ? "" : ", ") + s.signal;
    if ((s.pinches_lead || s.pinches_trail) && s.width_without_s > band.found_s + 0.05) gain += fmt::format("; without {} it would be {} s", s.signal, number_text(s.width_without_s, 1));
  }
  if (lead.empty() && trail.empty()) return "pinched by no signal";
  return fmt::format("begin pinched by {}, end by {}{}", lead.empty() ? "none" : lead, trail.empty() ? "none" : trail, gain);
}

}  // namespace

const char* word(Safety safety) {
  if (safety == Safety::checked) return "checked";
  return safety == Safety::partly ? "partly" : "not checked";
}

const char* word(Severity severity) {
  if (severity == Severity::violation) return "VIOLATION";
  return severity == Severity::warning ? "warning" : "note";
}

std::string to_text(const Review& review, const std::string& name) {
  std::string text = fmt::format("safety: {}: {}\n", review.safety == Safety::checked ? "checked" : review.safety == Safety::partly ? "PARTLY CHECKED" : "NOT CHECKED", review.why);
  const auto violations = std::count_if(review.findings.begin(), review.findings.end(), [](const Finding& f) { return f.severity == Severity::violation; });
  text += fmt::format("{}: {} signals, {} conflicting pairs, {} tenths of a second looked at; {} violations\n", printable(name, 500), review.signals, review.conflicts_checked, review.tenths_looked_at, violations);
  for (const Severity severity : {Severity::violation, Severity::warning, Severity::note})
    for (const Finding& f : review.findings)
      if (f.severity == severity) text += line_of(f);
  for (const BandCheck& band : review.bands)
    text += fmt::format("band: {} {} ({}): {} s of {} s (claimed {} s), leading edge at {} s; {}\n", band.corridor, band.direction, band.label, number_text(band.found_s, 2), number_text(band.cycle_s), number_text(band.claimed_s, 2),
                        number_text(band.start_s, 2), pinch_text(band));
  for (const std::string& what : review.unchecked) text += "not checked: " + printable(what, 500) + "\n";
  text += "caution: a review of a draft; local standards and law come first, a licensed engineer signs, verify in the field\n";
  return text;
}

std::string to_json(const Review& review, const std::string& name) {
  nlohmann::ordered_json json{{"plan", name}, {"safety", word(review.safety)}, {"why", review.why}};
  json["violations"] = std::count_if(review.findings.begin(), review.findings.end(), [](const Finding& f) { return f.severity == Severity::violation; });
  json["findings"] = nlohmann::ordered_json::array();
  for (const Finding& f : review.findings)
    json["findings"].push_back({{"rule", f.rule}, {"severity", f.severity == Severity::violation ? "violation" : word(f.severity)}, {"signal", f.signal}, {"sentence", f.sentence}, {"mend", f.mend}});
  json["bands"] = nlohmann::ordered_json::array();
  const auto number = [](double v) { return std::isfinite(v) ? nlohmann::ordered_json(std::round(v * 1000) / 1000) : nlohmann::ordered_json(nullptr); };
  for (const BandCheck& band : review.bands) {
    nlohmann::ordered_json item{{"corridor", band.corridor}, {"direction", band.direction}, {"bandwidth_s", number(band.found_s)}, {"claimed_s", number(band.claimed_s)}, {"band_start_s", number(band.start_s)},
                                {"stops", nlohmann::ordered_json::array()}};
    for (const StopSlack& s : band.stops)
      item["stops"].push_back({{"signal", s.signal}, {"lead_slack_s", number(s.lead_s)}, {"trail_slack_s", number(s.trail_s)}, {"pinches", s.pinches_lead || s.pinches_trail}, {"band_without_s", number(s.width_without_s)}});
    json["bands"].push_back(std::move(item));
  }
  json["unchecked"] = review.unchecked;
  json["caution"] = "a review of a draft; local standards and law come first, a licensed engineer signs, verify in the field";
  return json.dump(1, ' ', false, nlohmann::ordered_json::error_handler_t::replace) + "\n";
}

}  // namespace entrain::review
