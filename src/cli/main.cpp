// entrain: one command a file; this only finds the command and runs it.
#include <fmt/format.h>

#include <cstdio>
#include <exception>

#include "cli/command.hpp"

namespace {

void declare_common(CLI::App& command, entrain::cli::CommonOptions& common) {
  command.add_option("--period", common.periods, "Only this period (may be repeated)")->group("Common");
  command.add_option("--units", common.units, "Units shown: us or metric")->check(CLI::IsMember({"us", "metric"}))->group("Common");
  command.add_flag("--json", common.json, "Results as one JSON object on standard output")->group("Common");
  command.add_flag("--quiet", common.quiet, "No notes and no progress on standard error")->group("Common");
  command.add_option("--threads", common.threads, "Threads to use (0: as many as the machine has)")->check(CLI::Range(0, 1024))->group("Common");
  command.add_option("--seed", common.seed, "Seed of every random choice")->group("Common");
}

int run(int argc, char** argv) {
  using namespace entrain::cli;
  CLI::App app{
      "Plans the coordination of traffic signals from open road data and counts; every plan carries its proof.\n"
      "A draft for engineering review: local standards and law come first, and a licensed engineer signs."};
  app.name("entrain");
  app.require_subcommand(1);
  app.set_version_flag("--version", std::string("entrain ") + ENTRAIN_VERSION);
  CommonOptions common;
  std::function<int()> chosen;
  for (const Command& command : commands()) {
    CLI::App* sub = app.add_subcommand(command.name, command.summary);
    declare_common(*sub, common);
    sub->callback([&chosen, run_it = command.declare(*sub, common)] { chosen = run_it; });
  }
  try {
    app.parse(argc, argv);
  } catch (const CLI::ParseError& problem) {
    return app.exit(problem) == 0 ? done : wrong_usage;
  }
  return chosen();
}

}  // namespace

int main(int argc, char** argv) {
  try {
    return run(argc, argv);
  } catch (const std::bad_alloc&) {
    std::fputs("error: out of memory; expected an input that fits this machine. Use a smaller extract\n", stderr);
  } catch (const std::exception& problem) {
    fmt::print(stderr, "error: entrain met a case it was not built for ({}). Please report the input that led here\n", problem.what());
  }
  return entrain::cli::unusable_input;
}
