#include "review/signal_view.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "base/number_text.hpp"
#include "review/references.hpp"

namespace entrain::review {
namespace {

bool is_duration(double s) { return std::isfinite(s) && s >= 0 && s <= longest_cycle_s; }

void check_duration(const plan::Group& group, const char* name, double value, Findings& findings) {
  if (!is_duration(value)) findings.violation("number-out-of-range", fmt::format("group {}: {} is {}", printable(group.id), name, number_text(value)), "Give seconds from 0 to 3600", {group.id});
  else if (!is_on_tenth(value)) findings.violation("duration-not-in-tenths", fmt::format("group {}: {} is {} s", printable(group.id), name, number_text(value, 4)), "Controllers take tenths of a second", {group.id});
}

void check_numbers(const plan::Group& group, Findings& findings) {
  check_duration(group, "yellow_s", group.yellow_s, findings);
  check_duration(group, "red_clearance_s", group.red_clearance_s, findings);
  check_duration(group, "minimum_green_s", group.minimum_green_s, findings);
  check_duration(group, "clearance_s", group.clearance_s, findings);
  for (const plan::Green& green : group.greens)
    if (!is_duration(green.duration_s) || !(std::fabs(green.start_s) <= longest_cycle_s))
      findings.violation("number-out-of-range", fmt::format("group {}: a green from {} s of {} s", printable(group.id), number_text(green.start_s), number_text(green.duration_s)), "Give seconds from 0 to the cycle", {group.id});
}

void check_green_place(const SignalView& view, const plan::Group& group, const plan::Green& green, Findings& findings) {
  if (!is_on_tenth(green.start_s) || !is_on_tenth(green.duration_s))
    findings.violation("green-not-in-tenths", fmt::format("group {}: green [{} s, {} s) is no whole number of tenths", group.id, number_text(green.start_s, 4), number_text(green.start_s + green.duration_s, 4)),
                       "Round the green to tenths of a second", {group.id});
  if (green.start_s < 0 || green.start_s * 10 >= view.cycle - 1e-6 || to_tenths(green.duration_s) > view.cycle)
    findings.violation("green-outside-cycle", fmt::format("group {}: green starts at {} s and lasts {} s in a cycle of {} s", group.id, number_text(green.start_s), number_text(green.duration_s), number_text(view.signal.cycle_s)),
                       "Start in [0, cycle) and last at most the cycle", {group.id});
}

void lay_out_greens(SignalView& view, Findings& findings) {
  for (const plan::Group& group : view.signal.groups) {
    auto& spans = view.greens.emplace_back();
    for (const plan::Green& green : group.greens) {
      if (!(std::fabs(green.start_s) <= longest_cycle_s) || !is_duration(green.duration_s)) continue;
      check_green_place(view, group, green, findings);
      spans.push_back({modulo(to_tenths(green.start_s), view.cycle), std::min(to_tenths_up(green.duration_s), view.cycle)});
    }
  }
}

void lay_out_lamps(SignalView& view) {
  for (std::size_t g = 0; g < view.greens.size(); ++g) {
    Row green(view.cycle), lit(view.cycle);
    const std::vector<Lamp> lamps = view.lamps(g);
    for (int t = 0; t < view.cycle; ++t) {
      const Lamp lamp = lamps[static_cast<std::size_t>(t)];
      if (lamp != Lamp::red) lit.set(t);
      if (lamp == Lamp::green || lamp == Lamp::walk) green.set(t);
    }
    view.green_rows.push_back(std::move(green));
    view.lit_rows.push_back(std::move(lit));
  }
}

void check_size(std::size_t count, std::size_t most, const char* what, bool& fits, Findings& findings) {
  if (count <= most) return;
  fits = false;
  findings.violation("too-large", fmt::format("{} {}: more than the {} that any signal has; it was not looked at", count, what, most), "Split the signal, or correct the file");
}

bool fits_limits(const plan::Signal& signal, Findings& findings) {
  bool fits = true;
  check_size(signal.groups.size(), most_groups, "signal groups", fits, findings);
  check_size(signal.movements.size(), most_movements, "movements", fits, findings);
  check_size(signal.legs.size(), most_legs, "legs", fits, findings);
  check_size(signal.crossings.size(), most_crossings, "crossings", fits, findings);
  check_size(signal.conflicts.size(), most_conflicts, "conflicts", fits, findings);
  for (const plan::Group& g : signal.groups) {
    check_size(g.greens.size(), most_greens, "greens of one group", fits, findings);
    check_size(g.serves.size() + g.crossings.size(), most_uses, "movements and crossings of one group", fits, findings);
  }
  return fits;
}

}  // namespace

int modulo(int value, int cycle) {
  const int rest = value % cycle;
  return rest < 0 ? rest + cycle : rest;
}

int to_tenths(double seconds) {
  if (!std::isfinite(seconds)) return 0;
  return static_cast<int>(std::lround(std::min(1e7, std::max(-1e7, seconds)) * 10));
}

int to_tenths_up(double seconds) {
  if (!std::isfinite(seconds)) return 0;
  return static_cast<int>(std::ceil(std::min(1e7, std::max(-1e7, seconds)) * 10 - 1e-6));
}

bool is_on_tenth(double seconds) { return std::isfinite(seconds) && std::fabs(seconds * 10 - std::round(seconds * 10)) < 1e-6; }
bool is_whole(double seconds) { return std::isfinite(seconds) && std::fabs(seconds - std::round(seconds)) < 1e-6; }
std::string seconds_of(int tenths) { return number_text(tenths / 10.0, 1); }

bool walks(const plan::Group& group) { return group.kind == plan::GroupKind::pedestrian || (group.kind == plan::GroupKind::bicycle && group.serves.empty() && !group.crossings.empty()); }

void Row::add(const Row& other) {
  for (std::size_t i = 0; i < m_words.size() && i < other.m_words.size(); ++i) m_words[i] |= other.m_words[i];
}

std::vector<int> Row::common(const Row& other) const {
  std::vector<int> tenths;
  for (std::size_t i = 0; i < m_words.size() && i < other.m_words.size(); ++i)
    for (std::uint64_t both = m_words[i] & other.m_words[i], bit = 0; both != 0; both >>= 1, ++bit)
      if (both & 1) tenths.push_back(static_cast<int>(64 * i + bit));
  return tenths;
}

int SignalView::after_green(std::size_t i) const {
  const plan::Group& g = signal.groups[i];
  return walks(g) ? to_tenths_up(g.clearance_s) : to_tenths_up(g.yellow_s) + to_tenths_up(g.red_clearance_s);
}

int SignalView::buffer() const { return std::min(6000, std::max(0, to_tenths_up(standard("pedestrian_buffer_s", 3)))); }

bool SignalView::is_always_green(std::size_t i) const {
  return i < greens.size() && cycle > 0 && std::any_of(greens[i].begin(), greens[i].end(), [&](const Span& s) { return s.length >= cycle; });
}

double SignalView::standard(const char* key, double otherwise) const {
  const auto found = plan.standard.values.find(key);
  return found == plan.standard.values.end() || !std::isfinite(found->second) ? otherwise : found->second;
}

std::vector<Lamp> SignalView::lamps(std::size_t i) const {
  std::vector<Lamp> row(static_cast<std::size_t>(cycle), Lamp::red);
  const plan::Group& g = signal.groups[i];
  for (const Span& span : greens[i]) {
    if (span.length == 0) continue;
    int at = span.start, left = cycle;
    const auto show = [&](Lamp lamp, int tenths) {
      for (tenths = std::min(tenths, left); tenths > 0; --tenths, --left, at = at + 1 < cycle ? at + 1 : 0)
        if (auto& now = row[static_cast<std::size_t>(at)]; now == Lamp::red || lamp == Lamp::green || lamp == Lamp::walk) now = lamp;
    };
    if (walks(g)) {
      show(Lamp::walk, span.length);
      show(Lamp::pedestrian_clearance, to_tenths_up(g.clearance_s));
      show(Lamp::buffer, buffer());
    } else {
      show(Lamp::green, span.length);
      show(Lamp::yellow, to_tenths_up(g.yellow_s));
      show(Lamp::red_clearance, to_tenths_up(g.red_clearance_s));
    }
  }
  return row;
}

Findings::~Findings() {
  for (const auto& [rule, count] : m_count)
    if (count > most_alike)
      m_list.push_back({rule.first, static_cast<Severity>(rule.second), m_signal, fmt::format("and {} more like this", count - most_alike), {}, {}});
}

void Findings::add(const char* rule, Severity severity, std::string sentence, std::string mend, std::vector<std::string> groups) {
  if (++m_count[{rule, static_cast<int>(severity)}] > most_alike) return;
  m_list.push_back({rule, severity, m_signal, std::move(sentence), std::move(mend), std::move(groups)});
}

SignalView view_of(const plan::Plan& plan, const plan::Signal& signal, Findings& findings) {
  SignalView view{plan, signal};
  const bool fits = fits_limits(signal, findings);
  if (std::isfinite(signal.cycle_s) && signal.cycle_s >= 1 && signal.cycle_s <= longest_cycle_s) view.cycle = to_tenths(signal.cycle_s);
  else findings.violation("number-out-of-range", fmt::format("cycle_s is {}", number_text(signal.cycle_s)), "Give a cycle from 1 to 3600 s");
  if (!fits) {
    view.why_no_geometry = "too many parts";
    view.cycle = 0;
    return view;
  }
  resolve_ids(view, findings);
  for (const plan::Group& group : signal.groups) check_numbers(group, findings);
  check_geometry(view, findings);
  if (view.cycle == 0) return view;
  view.is_usable = true;
  lay_out_greens(view, findings);
  lay_out_lamps(view);
  return view;
}

}  // namespace entrain::review
