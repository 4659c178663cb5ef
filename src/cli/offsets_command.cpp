// entrain offsets PROBLEM: the bare engine on a problem file, and the re-check of its proof.
#include "cli/offsets_command.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <chrono>
#include <cmath>
#include <nlohmann/json.hpp>
#include <thread>

#include "drafting/offset_proof.hpp"
#include "review/certificate_check.hpp"

namespace entrain::cli {
namespace {

using Json = nlohmann::ordered_json;

struct OffsetsCommand {
  std::string problem, certificate, start;
  double time_s = 0, effort = 1;
};

constexpr std::size_t most_bytes = std::size_t{1} << 32;

Result<plan::OffsetProblem> load_problem(const std::string& path) {
  const FileText text = read_whole_file(path, most_bytes);
  if (!text.problems.empty()) return failure(text.problems);
  return plan::read_offset_problem(text.bytes, path);
}

Result<plan::Certificate> load_certificate(const std::string& path) {
  const FileText text = read_whole_file(path, most_bytes);
  if (!text.problems.empty()) return failure(text.problems);
  return plan::read_certificate(text.bytes, path);
}

double gap_of(std::int64_t value, std::int64_t bound) {
  if (value == bound) return 0;
  return static_cast<double>(value - bound) / std::max(1.0, std::fabs(static_cast<double>(value)));
}

std::string conflict_text(const offsets::Problem& problem, const std::vector<int>& conflict) {
  std::string text;
  const int own = static_cast<int>(problem.edges.size());
  for (std::size_t i = 0; i < conflict.size() && i < 40; ++i) {
    const int e = conflict[i];
    if (i > 0) text += ", ";
    if (e < own) text += fmt::format("edge {} ({} to {})", e, problem.edges[static_cast<std::size_t>(e)].from, problem.edges[static_cast<std::size_t>(e)].to);
    else text += fmt::format("fixed labels of nodes {} and {}", problem.fixed.front().node, problem.fixed[static_cast<std::size_t>(1 + e - own)].node);
  }
  return conflict.size() > 40 ? text + fmt::format(" and {} more", conflict.size() - 40) : text;
}

int refuse(const OffsetsCommand& command, const offsets::Problem& problem, const offsets::Answer& answer, bool json) {
  const bool proved = answer.status == offsets::Status::infeasible;
  if (json) fmt::print("{}\n", Json{{"infeasible", proved}, {"conflict", answer.conflict}}.dump());
  if (proved)
    return fail({error(command.problem, "no labels are admissible: these contradict each other: " + conflict_text(problem, answer.conflict), "differences that can sum to zero round every cycle",
                       "Allow more differences on one of them")},
                no_plan);
  return fail({error(command.problem, "no admissible labels were found, and none were proved impossible", "labels that avoid every forbidden difference", "Allow more time with --time, or forbid less")}, no_plan);
}

void print_answer(const offsets::Answer& answer, double seconds, bool json) {
  const double gap = gap_of(answer.value, answer.bound);
  if (!json) {
    fmt::print("value {}\nbound {}\ngap {:.4f} %{}\noffsets {}\n", answer.value, answer.bound, 100 * gap, answer.proved ? " (proved optimal)" : "", fmt::join(answer.assignment.labels, " "));
    return;
  }
  Json out{{"value", answer.value}, {"bound", answer.bound}, {"gap", std::round(gap * 1e8) / 1e8}, {"proved", answer.proved}, {"offsets", answer.assignment.labels}};
  if (std::any_of(answer.assignment.orders.begin(), answer.assignment.orders.end(), [](int p) { return p != 0; })) out["orders"] = answer.assignment.orders;
  out["seconds"] = std::round(seconds * 1000) / 1000;
  fmt::print("{}\n", out.dump());
}

Result<offsets::SolveOptions> options_of(const OffsetsCommand& command, const CommonOptions& common, std::chrono::steady_clock::time_point begin) {
  offsets::SolveOptions options;
  options.seed = common.seed;
  options.threads = common.threads > 0 ? common.threads : static_cast<int>(std::max(1u, std::thread::hardware_concurrency()));
  options.effort = command.effort;
  options.want_certificate = !command.certificate.empty();
  if (command.time_s > 0) {
    options.time_limit_s = command.time_s;
    options.elapsed_s = [begin] { return std::chrono::duration<double>(std::chrono::steady_clock::now() - begin).count(); };
  }
  if (command.start.empty()) return options;
  const auto start = load_certificate(command.start);
  if (!start) return failure(start.error());
  options.start = offsets::Assignment{start->offsets, start->orders};
  return options;
}

int run_offsets(const OffsetsCommand& command, const CommonOptions& common) {
  const auto begin = std::chrono::steady_clock::now();
  auto text = load_problem(command.problem);
  if (!text) return fail(text.error());
  const offsets::Problem problem = drafting::read_problem(*text);
  *text = {};
  const auto options = options_of(command, common, begin);
  if (!options) return fail(options.error());
  const auto answer = offsets::solve(problem, *options);
  if (!answer) return fail(answer.error());
  const double seconds = std::chrono::duration<double>(std::chrono::steady_clock::now() - begin).count();
  if (!command.certificate.empty()) {
    const Diagnostics problems = write_whole_file(command.certificate, plan::write_certificate(drafting::written_certificate(*answer)));
    if (!problems.empty()) return fail(problems);
  }
  if (answer->status != offsets::Status::solved) return refuse(command, problem, *answer, common.json);
  print_answer(*answer, seconds, common.json);
  return done;
}

Json json_of(const review::CertificateReview& review) {
  Json out{{"accepted", review.accepted}, {"proves_infeasible", review.proves_infeasible}, {"value", nullptr}, {"bound", nullptr}, {"gap", nullptr}, {"findings", Json::array()}};
  if (review.value) out["value"] = *review.value;
  if (review.bound) out["bound"] = *review.bound;
  if (review.value && review.bound) out["gap"] = std::round(gap_of(*review.value, *review.bound) * 1e8) / 1e8;
  for (const Diagnostic& finding : review.findings) out["findings"].push_back(to_text(finding));
  return out;
}

}  // namespace

int review_certificate(const std::string& problem_path, const std::string& certificate_path, const CommonOptions& common) {
  const auto problem = load_problem(problem_path);
  const auto certificate = load_certificate(certificate_path);
  Diagnostics problems;
  if (!problem) append(problems, problem.error());
  if (!certificate) append(problems, certificate.error());
  if (!problems.empty()) return fail(problems);
  const auto review = review::check_certificate(*problem, *certificate, certificate_path);
  if (common.json) fmt::print("{}\n", json_of(review).dump());
  else {
    fmt::print("certificate {}\n", review.accepted ? "accepted" : "rejected");
    if (review.proves_infeasible) fmt::print("no labels are admissible\n");
    if (review.bound) fmt::print("bound {}: nothing costs less\n", *review.bound);
    if (review.value) fmt::print("value {}{}\n", *review.value, review.proves_optimal ? ": optimal" : "");
    if (review.value && review.bound) fmt::print("gap {:.4f} %\n", 100 * gap_of(*review.value, *review.bound));
  }
  print_diagnostics(review.findings, common.quiet);
  return review.accepted ? done : violation;
}

std::function<int()> declare_offsets(CLI::App& app, const CommonOptions& common) {
  auto command = std::make_shared<OffsetsCommand>();
  app.add_option("problem", command->problem, "Offset problem, *.offsets")->required();
  app.add_option("--time", command->time_s, "Seconds to improve answer and bound (without it: a fixed effort, the same on every machine)")->check(CLI::Range(0.0, 1e6));
  app.add_option("--effort", command->effort, "Scales the fixed effort made without --time")->check(CLI::Range(0.0, 1e6));
  app.add_option("--certificate", command->certificate, "Where to write the proof of the bound, *.cert");
  app.add_option("--start", command->start, "A certificate whose answer to start from; the new answer is never worse");
  return [command, &common] { return run_offsets(*command, common); };
}

}  // namespace entrain::cli
