#include "report/page.hpp"

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "report/plan_view.hpp"
#include "report/sheet_parts.hpp"
#include "report/style_sheet.hpp"
#include "report/text_layout.hpp"
#include "report/time_space.hpp"

namespace entrain::report {
namespace {

constexpr std::string_view page_style = R"(
.numbers { display: flex; flex-wrap: wrap; gap: .3rem 2rem; margin: .6rem 0; }
.numbers dl { display: block; margin: 0; } .numbers dt { font-size: .8rem; } .numbers dd { font-size: 1.9rem; font-weight: bold; line-height: 1.05; }
.numbers dd small { font-size: .9rem; white-space: normal; }
@media print { body { font-size: 8.6pt; } td, th { padding: .1rem .3rem; } }
)";

std::string percent(double share) { return number_text(share * 100, 1) + " %"; }

Facts number_of(const std::string& label, const std::string& value, const std::string& beside = {}) { return {"number", "", {{label, value, beside, ""}}}; }

Section numbers_of(const PlanWithFigures& period) {
  const plan::Measures& m = period.figures.total;
  Section section{"numbers", {}};
  section.blocks = {{number_of("Cycle length", seconds_text(period.plan.cycle_s) + " s")},
                    {number_of("Control delay", number_text(m.delay_s_per_vehicle, 1) + " s", "a vehicle")},
                    {number_of("Stops", count_text(m.stops_per_h), "an hour")},
                    {number_of("Highest v/c", ratio_text(m.worst_degree_of_saturation), isolated(m.worst_degree_at))},
                    {number_of("Longest wait on foot", seconds_text(m.longest_pedestrian_wait_s) + " s")},
                    {number_of("Longest side-street wait", seconds_text(m.longest_side_street_wait_s) + " s")}};
  return section;
}

std::string pinch_text(const plan::Plan& plan, const plan::Direction& direction) {
  double least = 1e18;
  std::string where;
  for (const plan::Stop& stop : direction.stops) {
    const plan::Signal* signal = find_signal(plan, stop.signal);
    const plan::Group* group = signal == nullptr ? nullptr : find_group(*signal, stop.group);
    if (group == nullptr) continue;
    for (const plan::Green& green : group->greens)
      if (green.duration_s - stop.queue_clearance_s < least) least = green.duration_s - stop.queue_clearance_s, where = stop.signal;
  }
  return where.empty() ? "-" : seconds_text(least) + " s at " + isolated(where);
}

std::string worst_degree(const PlanWithFigures& period, const std::string& signal) {
  for (const auto& figures : period.figures.signals)
    if (figures.signal == signal) return ratio_text(figures.worst_degree_of_saturation);
  return "-";
}

const evaluation::SignalFigures* figures_of(const PlanWithFigures& period, const std::string& signal) {
  for (const auto& figures : period.figures.signals)
    if (figures.signal == signal) return &figures;
  return nullptr;
}

std::string freedom_text(const plan::Signal& signal) {
  if (!signal.freedom_early_s || !signal.freedom_late_s) return "-";
  return "\xE2\x88\x92" + seconds_text(*signal.freedom_early_s) + " / +" + seconds_text(*signal.freedom_late_s);
}

std::vector<Cell> signal_row(const PlanWithFigures& period, const plan::Signal& signal) {
  const auto offsets = coordinated_offsets(signal);
  const auto* figures = figures_of(period, signal.id);
  const bool free = signal.operation == plan::Operation::free || offsets.empty();
  std::vector<Cell> row{Cell(isolated(signal.id), "", true), Cell(isolated(signal.name)), Cell(seconds_text(signal.cycle_s)), Cell(isolated(signal.reference_group))};
  row.emplace_back(free ? "free" : seconds_text(offsets.front().begin_of_green_s), "", true);
  row.emplace_back(free ? "" : seconds_text(offsets.front().begin_of_yellow_s));
  row.emplace_back(sequence_text(signal));
  row.emplace_back(worst_degree(period, signal.id));
  row.emplace_back(figures == nullptr ? "-" : seconds_text(figures->delay_s), figures == nullptr ? "" : figures->level_of_service);
  row.emplace_back(figures == nullptr ? "-" : seconds_text(figures->longest_pedestrian_wait_s));
  row.emplace_back(figures == nullptr ? "-" : seconds_text(figures->longest_side_street_wait_s));
  row.emplace_back(freedom_text(signal));
  return row;
}

std::string changed(const std::optional<double>& old_value, double now) { return (old_value ? seconds_text(*old_value) : "?") + " \xE2\x86\x92 " + seconds_text(now); }

// Counted once round the circle, the short way.
std::string shift_text(double from, double to, double cycle_s) {
  if (!is_drawable_cycle(cycle_s)) return "";
  const double shift = std::remainder(to - from, cycle_s);
  return (shift > 0 ? "+" : shift < 0 ? "\xE2\x88\x92" : "") + seconds_text(std::fabs(shift)) + " s";
}

std::string split_changes(const plan::Signal& signal) {
  std::string text;
  for (const auto& [id, old_split] : signal.running->splits_s) {
    const plan::Group* group = find_group(signal, id);
    if (group == nullptr || !group->split_s || *group->split_s == old_split) continue;
    text += (text.empty() ? "" : ", ") + isolated(id) + ": " + changed(old_split, *group->split_s);
  }
  return text.empty() ? "as before" : text;
}

std::vector<Cell> change_row(const plan::Signal& signal) {
  const plan::Running& running = *signal.running;
  const auto offsets = coordinated_offsets(signal);
  std::vector<Cell> row{Cell(isolated(signal.id), "", true), Cell(changed(running.cycle_s, signal.cycle_s))};
  if (offsets.empty()) row.emplace_back("-");
  else row.emplace_back(changed(running.offset_s, offsets.front().begin_of_green_s), running.offset_s && running.cycle_s == signal.cycle_s ? shift_text(*running.offset_s, offsets.front().begin_of_green_s, signal.cycle_s) : "", true);
  row.emplace_back(isolated(signal.reference_group));
  row.emplace_back(split_changes(signal));
  const std::string sequence = sequence_text(signal);
  row.emplace_back(running.sequence.empty() || running.sequence == sequence ? sequence : running.sequence + " \xE2\x86\x92 " + sequence);
  return row;
}

Table lane_groups_table(const PlanWithFigures& period, Units units) {
  Table table{"", "", {{"Signal"}, {"Lane group"}, {"Phases"}, {"Flow veh/h", Align::right}, {"Capacity veh/h", Align::right}, {"v/c", Align::right}, {"Uniform delay s", Align::right}, {"Overflow delay s", Align::right},
                       {"Delay s", Align::right}, {"Level of service", Align::centre}, {"Stops a vehicle", Align::right}, {"Back of queue, storage"}, {"Arrivals"}}, {}, {}};
  for (const auto& f : period.figures.lane_groups) {
    std::string groups;
    for (const std::string& id : f.groups) groups += (groups.empty() ? "" : "+") + isolated(id);
    const bool over = f.storage_m && f.back_of_queue_m > *f.storage_m;
    table.rows.push_back({Cell(isolated(f.signal), "", true), isolated(f.lane_group), groups, count_text(f.flow_vph), count_text(f.capacity_vph), Cell(ratio_text(f.degree_of_saturation), "", f.degree_of_saturation > 1),
                          seconds_text(f.uniform_delay_s), seconds_text(f.overflow_delay_s), seconds_text(f.delay_s), f.level_of_service, ratio_text(f.stops_per_vehicle), Cell(queue_text(f, units), over ? "OVER" : "", over),
                          f.platooned ? "platoon" : "even"});
  }
  return table;
}

Table links_table(const plan::Plan& plan, Units units) {
  Table table{"", "", {{"Link"}, {"To phase"}, {"Length", Align::right}, {"Running time s", Align::right}, {"Speed", Align::right}, {"Running time from"}}, {}, {}};
  for (const plan::Link& link : plan.links) {
    const std::string spread_text = link.travel_time_sd_s ? "\xC2\xB1 " + seconds_text(*link.travel_time_sd_s) : "";
    table.rows.push_back({isolated(link.id), isolated(link.to_group), length_text(link.length_m, units), Cell(seconds_text(link.travel_time_s), spread_text),
                          link.travel_time_s > 0 ? speed_text(link.length_m / link.travel_time_s, units) : "-", link.travel_time_origin});
  }
  return table;
}

void add_table(Document& document, const std::string& heading, Table table) {
  if (table.rows.empty()) return;
  document.blocks.push_back({Heading{2, heading}});
  table.title.clear();
  document.blocks.push_back({std::move(table)});
}

void add_list(Document& document, const std::string& heading, std::vector<std::string> items) {
  if (!items.empty()) document.blocks.push_back({List{"", heading, texts_once(std::move(items))}});
}

std::vector<std::string> findings_of(const PlanWithFigures& period) {
  std::vector<std::string> texts;
  for (const ReviewFinding& finding : period.review.findings) texts.push_back((finding.signal.empty() ? "" : isolated(finding.signal) + ", ") + finding.rule + ": " + finding.text);
  return texts;
}

std::vector<std::string> all_cautions(const PlanWithFigures& period) {
  std::vector<std::string> texts = standing_cautions();
  texts.insert(texts.end(), period.plan.cautions.begin(), period.plan.cautions.end());
  texts.insert(texts.end(), period.figures.remarks.begin(), period.figures.remarks.end());
  return texts;
}

void add_diagrams(Document& document, const PlanWithFigures& period, const PageOptions& options) {
  for (std::size_t i = 0; i < period.plan.corridors.size(); ++i)
    document.blocks.push_back({Figure{"", "corridor-" + std::to_string(i + 1), time_space_diagram(period.plan, period.plan.corridors[i], {options.units, 3})}});
}

void add_claim(Table& table, std::string claim, std::string value, std::string proof) { table.rows.push_back({std::move(claim), Cell(std::move(value), "", true), std::move(proof)}); }

void add_band_claims(Table& table, const plan::Plan& plan) {
  for (const plan::Corridor& corridor : plan.corridors)
    for (const plan::Direction& direction : corridor.directions) {
      const std::string name = isolated(corridor.name) + " " + isolated(direction.label.empty() ? direction.name : direction.label);
      std::string proof = "the review lays the greens side by side and measures the band";
      if (direction.bandwidth_bound_s) proof = "no offsets give more than " + seconds_text(*direction.bandwidth_bound_s) + " s; " + proof;
      add_claim(table, "Band of " + name, seconds_text(direction.bandwidth_s) + " s", proof);
    }
}

std::string page_title(const plan::Plan& plan) { return isolated(plan.project) + ", " + isolated(plan.period); }

std::string bands_of(const plan::Plan& plan) {
  std::string text;
  for (const plan::Corridor& corridor : plan.corridors)
    for (const plan::Direction& d : corridor.directions) text += (text.empty() ? "" : "; ") + isolated(corridor.name) + " " + isolated(d.label.empty() ? d.name : d.label) + " " + seconds_text(d.bandwidth_s) + " s";
  return text;
}

OutputFile page_file(const std::string& path, const Document& document, PageSize page) { return {path, html(document, {page, true, 10.5, std::string(page_style)})}; }

PageOptions page_options(const PlanWithFigures& period, const std::vector<std::string>& sheets, const std::vector<std::string>& ids, const SheetOptions& options) {
  PageOptions page{options.units, options.page, {{"../index.html", "All periods"}}};
  for (std::size_t i = 0; i < ids.size(); ++i)
    if (const plan::Signal* signal = find_signal(period.plan, ids[i])) page.files.emplace_back("../sheets/" + sheets[i] + ".html", "Timing sheet " + isolated(signal->id) + " " + isolated(signal->name));
  return page;
}

}  // namespace

Table bands_table(const plan::Plan& plan) {
  Table table{"", "Bands", {{"Corridor"}, {"Direction"}, {"Share", Align::right}, {"Band s", Align::right}, {"Bound s", Align::right}, {"Efficiency", Align::right}, {"Attainability", Align::right},
                            {"Shortest green"}, {"Enters at s", Align::right}, {"Signals", Align::right}}, {}, {}};
  for (const plan::Corridor& corridor : plan.corridors)
    for (const plan::Direction& d : corridor.directions)
      table.rows.push_back({isolated(corridor.name), Cell(isolated(d.label.empty() ? d.name : d.label), d.label.empty() ? "" : d.name), number_text(d.weight, 2), Cell(d.bandwidth_s > 0 ? seconds_text(d.bandwidth_s) : "none", "", true),
                            d.bandwidth_bound_s ? seconds_text(*d.bandwidth_bound_s) : "-", percent(d.efficiency), percent(d.attainability), pinch_text(plan, d), seconds_text(d.band_start_s), std::to_string(d.stops.size())});
  table.note = "Efficiency: band over cycle. Attainability: band over the shortest green on the way.";
  return table;
}

Table claims_table(const PlanWithFigures& period) {
  const plan::Plan& plan = period.plan;
  Table table{"", "Claims and their proof", {{"Claim"}, {"Value", Align::right}, {"Proof"}}, {}, {}};
  add_claim(table, "No conflicting greens, clearances as the standard asks", period.review.verdict, period.review.why);
  add_band_claims(table, plan);
  if (plan.quality) {
    const plan::Quality& q = *plan.quality;
    add_claim(table, "Cost of the offsets (" + q.objective + ")", count_text(q.value), "no offsets of the same problem cost less than " + count_text(q.bound) + ": at most " + percent(q.gap) + " from the best" +
                         (q.certificate ? "; proof in " + *q.certificate : "; no certificate beside the plan"));
  }
  add_claim(table, "Cycle length", seconds_text(plan.cycle_s) + " s", plan.cycle_reason.empty() ? "given" : plan.cycle_reason);
  return table;
}

Table signals_table(const PlanWithFigures& period) {
  Table table{"", "Signals", {{"Signal"}, {"Name"}, {"Cycle s", Align::right}, {"Reference phase", Align::centre}, {"Offset green s", Align::right}, {"Offset yellow s", Align::right}, {"Sequence"}, {"v/c", Align::right},
                              {"Delay s", Align::right}, {"Wait on foot s", Align::right}, {"Side-street wait s", Align::right}, {"Offset may move s", Align::right}}, {}, {}};
  for (const plan::Signal& signal : period.plan.signals) table.rows.push_back(signal_row(period, signal));
  table.note = "Offsets: system time of the begin of green and of yellow of the reference phase. Offset may move: with every band as it is.";
  return table;
}

Table changes_table(const plan::Plan& plan) {
  Table table{"", "Changes, old \xE2\x86\x92 new", {{"Signal"}, {"Cycle s", Align::right}, {"Offset s", Align::right}, {"of begin of green", Align::centre}, {"Splits s"}, {"Sequence"}}, {}, {}};
  for (const plan::Signal& signal : plan.signals)
    if (signal.running) table.rows.push_back(change_row(signal));
  return table;
}

Document period_page(const PlanWithFigures& period, const PageOptions& options) {
  const plan::Plan& plan = period.plan;
  Document page{page_title(plan), {}};
  page.blocks = {{safety_notice({period})}, {Heading{1, page_title(plan)}},
                 {Paragraph{schedule_text(plan) + "; offsets count from " + plan.clock.reference + ", " + plan.clock.time_zone + "; design standard " + isolated(plan.standard.id) + "; " + plan.program, ""}}, {numbers_of(period)}};
  add_list(page, "Findings of the review", findings_of(period));
  add_table(page, "Bands", bands_table(plan));
  add_diagrams(page, period, options);
  add_table(page, "Claims and their proof", claims_table(period));
  add_table(page, "Signals", signals_table(period));
  add_table(page, "Changes, old \xE2\x86\x92 new", changes_table(plan));
  add_table(page, "Lane groups", lane_groups_table(period, options.units));
  add_table(page, "Links", links_table(plan, options.units));
  add_list(page, "Assumptions", plan.assumptions);
  add_list(page, "Cautions", all_cautions(period));
  if (!options.files.empty()) page.blocks.push_back({Links{"Files", options.files}});
  return page;
}

Document index_page(const std::vector<PlanWithFigures>& periods, const PageOptions& options) {
  Document page{periods.empty() ? "Plans" : isolated(periods.front().plan.project), {}};
  page.blocks = {{safety_notice(periods)}, {Heading{1, page.title}}};
  Table table{"", "", {{"Period"}, {"Schedule"}, {"Cycle s", Align::right}, {"Bands"}, {"Delay s", Align::right}, {"Highest v/c", Align::right}, {"Safety"}}, {}, {}};
  for (const PlanWithFigures& period : periods)
    table.rows.push_back({Cell(isolated(period.plan.period), "", true), schedule_text(period.plan), seconds_text(period.plan.cycle_s), bands_of(period.plan), number_text(period.figures.total.delay_s_per_vehicle, 1),
                          Cell(ratio_text(period.figures.total.worst_degree_of_saturation), isolated(period.figures.total.worst_degree_at)), period.review.verdict});
  page.blocks.push_back({std::move(table)});
  page.blocks.push_back({Links{"Pages and sheets", options.files}});
  page.blocks.push_back({List{"", "Cautions", standing_cautions()}});
  return page;
}

std::vector<std::string> period_folders(const std::vector<PlanWithFigures>& periods) {
  std::vector<std::string> names{"sheets"};  // taken
  for (const PlanWithFigures& period : periods) names.push_back(period.plan.period);
  names = file_names(names);
  names.erase(names.begin());
  return names;
}

std::vector<OutputFile> all_reports(const std::vector<PlanWithFigures>& periods, const SheetOptions& options) {
  const std::vector<std::string> folders = period_folders(periods), ids = signal_ids(periods), names = file_names(ids);
  std::vector<OutputFile> files;
  PageOptions index{options.units, options.page, {}};
  for (std::size_t i = 0; i < periods.size(); ++i) {
    const PlanWithFigures& period = periods[i];
    files.push_back(page_file(folders[i] + "/page.html", period_page(period, page_options(period, names, ids, options)), options.page));
    index.files.emplace_back(folders[i] + "/page.html", "Plan of " + isolated(period.plan.period));
    for (OutputFile& file : time_space_files(period.plan, {options.units, 3})) files.push_back({folders[i] + "/" + file.path, std::move(file.bytes)});
    if (const Table changes = changes_table(period.plan); !changes.rows.empty()) files.push_back({folders[i] + "/changes.csv", csv(changes)});
  }
  for (OutputFile& file : timing_sheets(periods, options)) files.push_back({"sheets/" + file.path, std::move(file.bytes)});
  for (std::size_t i = 0; i < ids.size(); ++i) index.files.emplace_back("sheets/" + names[i] + ".html", "Timing sheet " + isolated(ids[i]));
  files.insert(files.begin(), page_file("index.html", index_page(periods, index), options.page));
  return files;
}

}  // namespace entrain::report
