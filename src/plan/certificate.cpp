#include "plan/certificate.hpp"

#include <fmt/format.h>

#include <climits>

#include "plan/number_lines.hpp"

namespace entrain::plan {
namespace {

class CertificateReader {
 public:
  CertificateReader(std::string_view text, const std::string& source) : m_lines(text, source) {}

  Result<Certificate> read() {
    if (!m_lines.next_line() || m_lines.word() != "entrain-certificate" || m_lines.word() != "1") {
      m_lines.complain("another first line", "entrain-certificate 1", "Name a certificate");
      return failure(m_lines.complaints());
    }
    m_lines.end_line();
    while (m_lines.next_line()) read_line(m_lines.word());
    check_last_cycle();
    if (m_claims != 1) m_lines.complain(fmt::format("{} claims", m_claims), "one line: bound NUMBER, or infeasible", "State what is proved");
    if (m_lines.complained()) return failure(m_lines.complaints());
    return std::move(m_proof);
  }

 private:
  void read_line(std::string_view key) {
    if (key != "theta") check_last_cycle();
    if (key == "scale") read_number("scale", 1, largest_certificate_scale, m_proof.scale);
    else if (key == "bound") { read_number("bound", -largest_certificate_entry, largest_certificate_entry, m_proof.bound); ++m_claims; }
    else if (key == "infeasible") { m_proof.infeasible = true; ++m_claims; m_lines.end_line(); }
    else if (key == "value") read_number("value", -largest_certificate_entry, largest_certificate_entry, m_proof.value.emplace());
    else if (key == "offsets") read_list("offsets", m_proof.offsets);
    else if (key == "orders") read_list("orders", m_proof.orders);
    else if (key == "merge") read_step(StepKind::merge);
    else if (key == "end") read_step(StepKind::end);
    else if (key == "chain") read_step(StepKind::chain);
    else if (key == "same") read_step(StepKind::same);
    else if (key == "alpha") read_alpha();
    else if (key == "cycle") read_cycle();
    else if (key == "theta") read_theta();
    else m_lines.complain(fmt::format("\"{}\"", printable(std::string(key), 40)), "scale, bound, infeasible, value, offsets, orders, merge, end, chain, same, alpha, cycle or theta",
                          "Correct the first word of the line");
  }

  void read_number(const char* what, std::int64_t least, std::int64_t most, std::int64_t& value) {
    if (const auto number = m_lines.number(what, least, most)) value = *number;
    m_lines.end_line();
  }

  void read_list(const char* what, std::vector<int>& list) {
    if (const auto numbers = m_lines.numbers(what, -1, INT_MAX)) list.assign(numbers->begin(), numbers->end());
  }

  void read_step(StepKind kind) {
    const auto first = m_lines.number("number", 0, INT_MAX);
    const auto second = kind == StepKind::merge && first ? m_lines.number("number", 0, INT_MAX) : std::optional<std::int64_t>(0);
    if (first && second) m_proof.steps.push_back({kind, static_cast<int>(*first), static_cast<int>(*second)});
    m_lines.end_line();
  }

  void read_alpha() {
    const auto edge = m_lines.number("edge", 0, INT_MAX);
    if (!edge) return;
    const std::string_view end = m_lines.word();
    if (end != "from" && end != "to") return m_lines.complain(fmt::format("\"{}\"", printable(std::string(end), 40)), "from or to", "Name an end of the edge");
    if (auto values = m_lines.numbers("alphas", -1, largest_certificate_entry)) m_proof.alphas.push_back({static_cast<int>(*edge), end == "from", std::move(*values)});
  }

  void read_cycle() {
    CertificateCycle& cycle = m_proof.cycles.emplace_back();
    for (std::string_view text = m_lines.word(); !text.empty(); text = m_lines.word()) {
      const char sign = text.back();
      NumberLines one(text.substr(0, text.size() - 1), m_lines.where());
      const auto edge = one.next_line() ? one.number("edge", 0, INT_MAX) : std::nullopt;
      if (!edge || (sign != '+' && sign != '-'))
        return m_lines.complain(fmt::format("\"{}\" in a cycle", printable(std::string(text), 40)), "an edge with + or - behind it", "Correct the walk");
      cycle.walk.push_back({static_cast<int>(*edge), sign == '+'});
    }
  }

  void read_theta() {
    auto values = m_lines.numbers("theta", -1, largest_certificate_entry);
    if (!values) return;
    if (m_proof.cycles.empty()) return m_lines.complain("a theta before any cycle", "the cycle first", "Move the lines");
    m_proof.cycles.back().thetas.push_back(std::move(*values));
  }

  void check_last_cycle() {
    if (m_proof.cycles.empty()) return;
    const CertificateCycle& cycle = m_proof.cycles.back();
    if (m_checked == m_proof.cycles.size()) return;
    m_checked = m_proof.cycles.size();
    if (cycle.thetas.size() != cycle.walk.size())
      m_lines.complain(fmt::format("{} thetas for a cycle of {} edges before this line", cycle.thetas.size(), cycle.walk.size()), "one each", "Complete the cycle");
  }

  NumberLines m_lines;
  Certificate m_proof;
  std::size_t m_checked = 0;
  int m_claims = 0;
};

void add_numbers(std::string& text, const char* key, const std::vector<int>& numbers) {
  if (numbers.empty()) return;
  text += key;
  for (const int number : numbers) {
    text += ' ';
    add_number(text, number);
  }
  text += '\n';
}

void add_entries(std::string& text, const std::vector<std::int64_t>& entries) {
  for (const std::int64_t entry : entries) {
    text += ' ';
    add_number(text, entry);
  }
  text += '\n';
}

void add_step(std::string& text, const CertificateStep& step) {
  switch (step.kind) {
    case StepKind::merge: text += fmt::format("merge {} {}\n", step.first, step.second); break;
    case StepKind::end: text += fmt::format("end {}\n", step.first); break;
    case StepKind::chain: text += fmt::format("chain {}\n", step.first); break;
    case StepKind::same: text += fmt::format("same {}\n", step.first); break;
  }
}

}  // namespace

Result<Certificate> read_certificate(std::string_view text, const std::string& source) { return CertificateReader(text, source).read(); }

std::string write_certificate(const Certificate& certificate) {
  std::string text = fmt::format("entrain-certificate 1\nscale {}\n", certificate.scale);
  text += certificate.infeasible ? std::string("infeasible\n") : fmt::format("bound {}\n", certificate.bound);
  if (certificate.value) text += fmt::format("value {}\n", *certificate.value);
  add_numbers(text, "offsets", certificate.offsets);
  add_numbers(text, "orders", certificate.orders);
  for (const CertificateStep& step : certificate.steps) add_step(text, step);
  for (const CertificateAlpha& alpha : certificate.alphas) {
    text += fmt::format("alpha {} {}", alpha.edge, alpha.at_from ? "from" : "to");
    add_entries(text, alpha.values);
  }
  for (const CertificateCycle& cycle : certificate.cycles) {
    text += "cycle";
    for (const WalkedEdge& walked : cycle.walk) text += fmt::format(" {}{}", walked.edge, walked.forward ? '+' : '-');
    text += '\n';
    for (const auto& theta : cycle.thetas) {
      text += "theta";
      add_entries(text, theta);
    }
  }
  return text;
}

}  // namespace entrain::plan
