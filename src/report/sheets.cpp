#include "report/sheets.hpp"

#include <algorithm>
#include <set>

#include "report/sheet_fit.hpp"
#include "report/sheet_parts.hpp"
#include "report/sketch.hpp"
#include "report/style_sheet.hpp"
#include "report/text_layout.hpp"

namespace entrain::report {
namespace {

std::string first_of(const std::string& text, const std::string& otherwise) { return text.empty() ? otherwise : text; }

Section head_of(const SignalPeriod& pattern, const SheetOptions& options) {
  const plan::Signal& signal = *pattern.signal;
  Facts blanks{"signed", "", {}};
  blanks.facts = {{"Version", first_of(options.version, pattern.period->plan.program), "", ""}, {"Date", options.date, "", ""},
                  {"Prepared by", options.author, "", ""}, {"Checked by", options.checker, "", ""}, {"Seal", "", "", "seal"}};
  Section words{"words", {}};
  words.blocks = {{Paragraph{isolated(pattern.period->plan.project) + " \xC2\xB7 timing sheet", "project"}}, {Heading{1, isolated(signal.id)}}, {Paragraph{isolated(signal.name), "name"}}, {blanks}};
  Section head{"head", {}};
  head.blocks = {{words}, {Figure{"sketch", "sketch", intersection_sketch(signal)}}};
  return head;
}

Table change_log() {
  Table table{"log", "Change log", {{"Date"}, {"Version"}, {"What was changed, and why"}, {"By"}, {"Checked"}}, {}, {}};
  table.rows.assign(3, std::vector<Cell>(5, Cell("")));
  return table;
}

Section front_of(const std::vector<PlanWithFigures>& periods, const std::vector<SignalPeriod>& patterns, const SheetOptions& options) {
  Section front{"front", {}};
  front.blocks.push_back({head_of(patterns.front(), options)});
  front.blocks.push_back({safety_notice(periods)});
  Section cards{"cards", {}};
  for (const SignalPeriod& pattern : patterns) cards.blocks.push_back({pattern_card(pattern)});
  front.blocks.push_back({std::move(cards)});
  front.blocks.push_back({phase_table(patterns)});
  List cautions = caution_list(patterns, true);
  cautions.items.resize(std::min<std::size_t>(cautions.items.size(), 6));
  front.blocks.push_back({std::move(cautions)});
  front.blocks.push_back({change_log()});
  return front;
}

void add_if_any(Section& section, Table table) {
  if (!table.rows.empty()) section.blocks.push_back({std::move(table)});
}

void add_if_any(Section& section, List list) {
  if (!list.items.empty()) section.blocks.push_back({std::move(list)});
}

Section back_of(const std::vector<SignalPeriod>& patterns, const SheetOptions& options) {
  Section back{"back", {}};
  back.blocks.push_back({Heading{1, isolated(patterns.front().signal->id) + " \xC2\xB7 why, and on what it rests"}});
  add_if_any(back, finding_list(patterns));
  add_if_any(back, conflict_matrix(patterns));
  add_if_any(back, clearance_table(patterns, options.units));
  add_if_any(back, evidence_list(patterns));
  add_if_any(back, lane_group_table(patterns, options.units));
  add_if_any(back, assumption_list(patterns));
  add_if_any(back, caution_list(patterns, false));
  return back;
}

// 0: checked and no rule is violated.
int severity(const ReviewSummary& review) {
  if (review.violations > 0) return 3;
  return review.verdict == "checked" ? 0 : review.verdict == "partly" ? 1 : 2;
}

}  // namespace

const std::vector<std::string>& standing_cautions() {
  static const std::vector<std::string> cautions = {
      "A draft for engineering review. A licensed engineer checks it, signs it and answers for it; local codes and law come first.",
      "Never shorten yellow, red clearance, walk or pedestrian clearance to fit a wave. Verify clearances and conflicts at the cabinet and in the field.",
      "Offsets mean nothing without a common clock: check reference, time zone and the instant the controller counts from."};
  return cautions;
}

Notice safety_notice(const std::vector<PlanWithFigures>& periods) {
  const PlanWithFigures* worst = nullptr;
  for (const PlanWithFigures& period : periods)
    if (worst == nullptr || severity(period.review) > severity(worst->review)) worst = &period;
  if (worst == nullptr) return {"SAFETY NOT CHECKED", "no plan", "alarm"};
  const int grade = severity(worst->review);
  const std::string where = periods.size() > 1 && grade > 0 ? isolated(worst->plan.period) + ": " : "";
  if (grade == 0) return {"Safety checked", worst->review.why, "quiet"};
  if (grade == 1) return {"SAFETY PARTLY CHECKED", where + worst->review.why, "alarm"};
  if (grade == 2) return {"SAFETY NOT CHECKED", where + worst->review.why, "alarm"};
  const std::string count = std::to_string(worst->review.violations) + (worst->review.violations == 1 ? " rule is violated. " : " rules are violated. ");
  return {"DO NOT USE: THE REVIEW FOUND VIOLATIONS", where + count + worst->review.findings.front().text, "alarm"};
}

std::vector<std::string> signal_ids(const std::vector<PlanWithFigures>& periods) {
  std::vector<std::string> ids;
  std::set<std::string> seen;
  for (const PlanWithFigures& period : periods)
    for (const plan::Signal& signal : period.plan.signals)
      if (seen.insert(signal.id).second) ids.push_back(signal.id);
  return ids;
}

Document timing_sheet(const std::vector<PlanWithFigures>& periods, const std::string& signal, const SheetOptions& options) {
  const std::vector<SignalPeriod> patterns = periods_of(periods, signal);
  if (patterns.empty()) return {signal, {}};
  Document document{isolated(signal) + " " + isolated(patterns.front().signal->name), {}};
  document.blocks.push_back({front_of(periods, patterns, options)});
  document.blocks.push_back({back_of(patterns, options)});
  return document;
}

std::vector<OutputFile> timing_sheets(const std::vector<PlanWithFigures>& periods, const SheetOptions& options) {
  const std::vector<std::string> ids = signal_ids(periods), names = file_names(ids);
  std::vector<OutputFile> files;
  for (std::size_t i = 0; i < ids.size(); ++i) {
    const Document document = timing_sheet(periods, ids[i], options);
    const double letters = letters_for_one_page(std::get<Section>(document.blocks.front().content), options.page);
    files.push_back({names[i] + ".html", html(document, {options.page, false, letters, std::string(sheet_style)})});
    files.push_back({names[i] + ".csv", csv(document)});
  }
  return files;
}

}  // namespace entrain::report
