#include "review/review_text.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>
#include <nlohmann/json.hpp>

#include "base/diagnostic.hpp"
#include "base/number_text.hpp"

namespace entrain::review {
namespace {

using Json = nlohmann::ordered_json;

constexpr const char* caution = "a review of a draft; local standards and law come first, a licensed engineer signs, verify in the field";

std::string line_of(const Finding& f) {
  std::string text = fmt::format("{}: {}: {}{}", word(f.severity), f.rule, f.signal.empty() ? "" : printable(f.signal) + ": ", printable(f.sentence, 2000));
  if (!f.mend.empty()) text += ". " + printable(f.mend, 500);
  return text + "\n";
}

// "T8 (+0.4 s a second earlier)".
std::string pincher(const StopSlack& s, double gain_s, const char* how) {
  return gain_s > 0.005 ? fmt::format("{} (one second {} gives {} s)", printable(s.signal), how, number_text(gain_s, 2)) : printable(s.signal);
}

std::string pinch_text(const BandCheck& band) {
  std::string lead, trail, gain;
  for (const StopSlack& s : band.stops) {
    if (s.pinches_lead) lead += (lead.empty() ? "" : ", ") + pincher(s, s.gain_lead_s, "earlier");
    if (s.pinches_trail) trail += (trail.empty() ? "" : ", ") + pincher(s, s.gain_trail_s, "later");
    if ((s.pinches_lead || s.pinches_trail) && s.width_without_s > band.found_s + 0.05) gain += fmt::format("; without {} it would be {} s", printable(s.signal), number_text(s.width_without_s, 1));
  }
  if (lead.empty() && trail.empty()) return "pinched by no signal";
  return fmt::format("begin pinched by {}, end by {}{}", lead.empty() ? "none" : lead, trail.empty() ? "none" : trail, gain);
}

std::string band_text(const BandCheck& band) {
  return fmt::format("band: {} {} ({}): {} s of {} s (claimed {} s), leading edge at {} s, efficiency {}, attainability {}; {}\n", printable(band.corridor), printable(band.direction), printable(band.label), number_text(band.found_s, 2),
                     number_text(band.cycle_s), number_text(band.claimed_s, 2), number_text(band.start_s, 2), number_text(band.efficiency), number_text(band.attainability), pinch_text(band));
}

std::string signal_text(const SignalCheck& s) {
  std::string text = fmt::format("signal: {}: {} conflicting pairs from {}, {} pairs of greens, {} tenths of a second, {} clearances; {} violations, {} warnings, {} notes", printable(s.signal), s.conflicting_pairs, s.conflicts_from,
                                 s.green_pairs, s.tenths, s.clearances, s.violations, s.warnings, s.notes);
  if (s.freedom_early_s && s.freedom_late_s) text += fmt::format("; its offset may move {} s earlier, {} s later with every band as it is", number_text(*s.freedom_early_s, 1), number_text(*s.freedom_late_s, 1));
  return text + "\n";
}

Json number(double v) { return std::isfinite(v) ? Json(std::round(v * 1000) / 1000) : Json(nullptr); }
Json number(const std::optional<double>& v) { return v ? number(*v) : Json(nullptr); }

Json json_of(const Finding& f) {
  return {{"rule", f.rule}, {"severity", f.severity == Severity::violation ? "violation" : word(f.severity)}, {"signal", f.signal}, {"groups", f.groups}, {"sentence", f.sentence}, {"mend", f.mend}};
}

Json json_of(const StopSlack& s) {
  return {{"signal", s.signal}, {"group", s.group}, {"lead_slack_s", number(s.lead_s)}, {"trail_slack_s", number(s.trail_s)}, {"pinches", s.pinches_lead || s.pinches_trail}, {"pinches_lead", s.pinches_lead},
          {"pinches_trail", s.pinches_trail}, {"gain_lead_s", number(s.gain_lead_s)}, {"gain_trail_s", number(s.gain_trail_s)}, {"band_without_s", number(s.width_without_s)}};
}

Json json_of(const BandCheck& band) {
  Json item{{"corridor", band.corridor},
            {"direction", band.direction},
            {"label", band.label},
            {"bandwidth_s", number(band.found_s)},
            {"claimed_s", number(band.claimed_s)},
            {"band_start_s", number(band.start_s)},
            {"claimed_start_s", number(band.claimed_start_s)},
            {"efficiency", number(band.efficiency)},
            {"attainability", number(band.attainability)},
            {"stops", Json::array()}};
  for (const StopSlack& s : band.stops) item["stops"].push_back(json_of(s));
  return item;
}

Json json_of(const SignalCheck& s) {
  return {{"signal", s.signal}, {"conflicts_from", s.conflicts_from}, {"conflicting_pairs", s.conflicting_pairs}, {"green_pairs", s.green_pairs}, {"tenths", s.tenths}, {"clearances", s.clearances},
          {"violations", s.violations}, {"warnings", s.warnings}, {"notes", s.notes}, {"freedom_early_s", number(s.freedom_early_s)}, {"freedom_late_s", number(s.freedom_late_s)}};
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
  std::string text = fmt::format("safety: {}: {}\n", review.safety == Safety::checked ? "checked" : review.safety == Safety::partly ? "PARTLY CHECKED" : "NOT CHECKED", printable(review.why, 2000));
  text += fmt::format("{}: {} signals, {} conflicting pairs, {} tenths of a second looked at; {} violations, {} warnings\n", printable(name, 500), review.signals, review.conflicts_checked, review.tenths_looked_at,
                      review.count(Severity::violation), review.count(Severity::warning));
  for (const Severity severity : {Severity::violation, Severity::warning, Severity::note})
    for (const Finding& f : review.findings)
      if (f.severity == severity) text += line_of(f);
  for (const BandCheck& band : review.bands) text += band_text(band);
  for (const SignalCheck& s : review.per_signal) text += signal_text(s);
  for (const std::string& what : review.unchecked) text += "not checked: " + printable(what, 500) + "\n";
  return text + "caution: " + caution + "\n";
}

std::string to_json(const Review& review, const std::string& name) {
  Json json{{"plan", name}, {"safety", word(review.safety)}, {"why", review.why}};
  json["violations"] = review.count(Severity::violation);
  json["warnings"] = review.count(Severity::warning);
  json["findings"] = Json::array();
  for (const Finding& f : review.findings) json["findings"].push_back(json_of(f));
  json["bands"] = Json::array();
  for (const BandCheck& band : review.bands) json["bands"].push_back(json_of(band));
  json["signals"] = Json::array();
  for (const SignalCheck& s : review.per_signal) json["signals"].push_back(json_of(s));
  json["unchecked"] = review.unchecked;
  json["caution"] = caution;
  return json.dump(1, ' ', false, Json::error_handler_t::replace) + "\n";
}

}  // namespace entrain::review
