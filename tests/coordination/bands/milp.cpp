#include "milp.hpp"

#include <cmath>
#include <cstdlib>
#include <fstream>
#include <iomanip>
#include <sstream>

namespace entrain::bands::milp {
namespace {

class Writer {
 public:
  Writer(const Problem& problem, const std::vector<double>& own, const PaceInput* paces = nullptr,
         const LinkBandInput* links = nullptr)
      : m_problem(problem), m_own(own), m_paces(paces), m_links(links) {
    m_rows << std::setprecision(15);
    m_bounds << std::setprecision(15);
  }

  std::string run() {
    for (std::size_t s = 0; s < m_problem.stations.size(); ++s) add_station(s);
    for (std::size_t c = 0; c < m_problem.corridors.size(); ++c)
      for (std::size_t d = 0; d < m_problem.corridors[c].directions.size(); ++d) add_direction(c, d);
    return "Maximize\n obj: " + (m_links ? m_objective : "r") + "\nSubject To\n" + m_rows.str() + "Bounds\n r >= 0\n" +
           m_bounds.str() + "Generals\n" + m_generals.str() + "Binaries\n" + m_binaries.str() + "End\n";
  }

 private:
  double period(std::size_t s) const { return m_problem.cycle_s / (m_problem.stations[s].half_period ? 2 : 1); }
  static std::string option_name(std::size_t s, int o) { return "o_" + std::to_string(s) + "_" + std::to_string(o); }

  void add_station(std::size_t s) {
    const Station& station = m_problem.stations[s];
    const std::string x = "x_" + std::to_string(s);
    if (station.fixed_offset_s)
      m_bounds << " " << x << " = " << *station.fixed_offset_s << "\n";
    else
      m_bounds << " 0 <= " << x << " <= " << period(s) << "\n";
    m_rows << " ";
    for (int o = 0; o < station.option_count; ++o)
      m_rows << (o ? " + " : "") << option_name(s, o), m_binaries << " " << option_name(s, o) << "\n";
    m_rows << " = 1\n";
    if (station.fixed_option) m_rows << " " << option_name(s, *station.fixed_option) << " = 1\n";
  }

  void add_direction(std::size_t c, std::size_t d) {
    const Direction& direction = m_problem.corridors[c].directions[d];
    const std::string name = std::to_string(c) + "_" + std::to_string(d);
    m_bounds << " 0 <= u_" << name << " <= " << m_problem.cycle_s << "\n 0 <= b_" << name << " <= " << m_problem.cycle_s
             << "\n";
    if (direction.weight > 0 && !m_links)
      m_rows << " b_" << name << " - " << direction.weight * m_own[c] << " r >= 0\n";
    if (m_paces) add_paces(d);
    if (m_links) add_halves(d, direction.stops.size());
    double travel = 0;
    std::ostringstream free_travel;
    free_travel << std::setprecision(15);
    for (std::size_t j = 0; j < direction.stops.size(); ++j) {
      travel += j > 0 && !m_paces ? direction.stops[j].travel_s : 0;
      if (m_paces && j > 0) {
        const std::size_t link = d == 0 ? j - 1 : direction.stops.size() - 1 - j;
        free_travel << " - " << m_paces->links[link].length_m << " " << pace(d, link);
      }
      add_stop(direction.stops[j], name, name + "_" + std::to_string(j), travel, free_travel.str());
    }
  }

  static std::string pace(std::size_t direction, std::size_t link) {
    return "p_" + std::to_string(direction) + "_" + std::to_string(link);
  }

  // Half widths: a_j at stops, m_j <= a_j, a_{j+1} on links. The line is u.
  void add_halves(std::size_t d, std::size_t stops) {
    std::ostringstream objective;
    objective << std::setprecision(15);
    for (std::size_t j = 0; j + 1 < stops; ++j) {
      const std::string name = "0_" + std::to_string(d) + "_";
      const std::string half = "m_" + name + std::to_string(j);
      const double weight = d == 0 ? m_links->forward_weights[j] : m_links->backward_weights[stops - 2 - j];
      m_rows << " " << half << " - a_" << name << j << " <= 0\n " << half << " - a_" << name << j + 1 << " <= 0\n";
      objective << (m_objective.empty() && j == 0 ? "" : " + ") << 2 * weight << " " << half;
    }
    m_objective += objective.str();
  }

  void add_paces(std::size_t d) {
    for (std::size_t i = 0; i < m_paces->links.size(); ++i) {
      m_bounds << " " << m_paces->links[i].least_s_per_m << " <= " << pace(d, i)
               << " <= " << m_paces->links[i].most_s_per_m << "\n";
      if (i == 0) continue;
      m_rows << " " << pace(d, i) << " - " << pace(d, i - 1) << " <= " << m_paces->most_change_s_per_m << "\n";
      m_rows << " " << pace(d, i - 1) << " - " << pace(d, i) << " <= " << m_paces->most_change_s_per_m << "\n";
    }
  }

  // y = u - x + travel - start + n period, 0 <= y <= duration - b, start and duration by the window chosen.
  void add_stop(const Stop& stop, const std::string& direction, const std::string& name, double travel,
                const std::string& free_travel) {
    const auto s = static_cast<std::size_t>(stop.station);
    std::ostringstream start, duration;
    start << std::setprecision(15);
    duration << std::setprecision(15);
    for (std::size_t o = 0; o < stop.windows.size(); ++o) {
      std::ostringstream chosen;
      for (std::size_t w = 0; w < stop.windows[o].size(); ++w) {
        const Window& window = stop.windows[o][w];
        const bool open = window.duration_s == m_problem.cycle_s;
        const double length = open ? 3 * m_problem.cycle_s : window.duration_s - stop.clearance_s;
        if (length <= 0) continue;
        const std::string delta = "w_" + name + "_" + std::to_string(o) + "_" + std::to_string(w);
        m_binaries << " " << delta << "\n";
        chosen << " + " << delta;
        start << " + " << window.start_s + (open ? 0 : stop.clearance_s) << " " << delta;
        duration << " - " << length << " " << delta;
      }
      m_rows << " 0 r" << chosen.str() << " - " << option_name(s, static_cast<int>(o)) << " = 0\n";
    }
    m_bounds << " -100000 <= n_" << name << " <= 100000\n";
    m_generals << " n_" << name << "\n";
    m_rows << " y_" << name << " - u_" << direction << " + x_" << s << start.str() << free_travel << " - " << period(s)
           << " n_" << name << " = " << travel << "\n";
    if (!m_links)
      m_rows << " y_" << name << " + b_" << direction << duration.str() << " <= 0\n";
    else
      m_rows << " a_" << name << " - y_" << name << " <= 0\n a_" << name << " + y_" << name << duration.str()
             << " <= 0\n";
  }

  const Problem& m_problem;
  const std::vector<double>& m_own;
  const PaceInput* m_paces;
  const LinkBandInput* m_links;
  std::string m_objective;
  std::ostringstream m_rows, m_bounds, m_generals, m_binaries;
};

}  // namespace

std::string program(const Problem& problem, const std::vector<double>& own_best_s) {
  return Writer(problem, own_best_s).run();
}

std::string program(const PaceInput& input) {
  TwoWayInput corridor = input.corridor;
  corridor.forward_travel_s.assign(input.links.size(), 0.0);
  corridor.backward_travel_s = corridor.forward_travel_s;
  return Writer(to_problem(corridor), {1}, &input).run();
}

std::string program(const LinkBandInput& input) {
  return Writer(to_problem(input.corridor), {1}, nullptr, &input).run();
}

bool is_available() { return std::system("cbc -quit >/dev/null 2>&1 </dev/null") == 0; }

std::optional<double> solve(const std::string& program, const std::string& folder) {
  const std::string problem_file = folder + "/bands.lp", answer_file = folder + "/bands.txt";
  std::ofstream(problem_file) << program;
  const std::string command =
      "cbc " + problem_file +
      " -ratioGap 0 -allowableGap 0 -integerTolerance 1e-9 -primalTolerance 1e-9 -solve -solution " + answer_file +
      " >/dev/null 2>&1 </dev/null";
  if (std::system(command.c_str()) != 0) return std::nullopt;
  std::ifstream in(answer_file);
  std::string line;
  std::getline(in, line);
  if (line.rfind("Optimal", 0) != 0) return std::nullopt;
  const auto at = line.find("value");
  double value = 0;
  std::istringstream(line.substr(at + 5)) >> value;
  return std::abs(value);
}

}  // namespace entrain::bands::milp
