#include "cli/command.hpp"

namespace entrain::cli {

// The list of commands, in the order in which a job uses them.
const std::vector<Command>& commands() {
  static const std::vector<Command> list = {
      {"import", "Roads to a network: signals, links, movements, corridors, and every default that was used", declare_import},
      {"draft", "A coordinated timing plan for every period, with sheets, diagrams and a page", declare_draft},
      {"review", "Re-check a plan's safety and claims by other code than made it", declare_review},
      {"compare", "A complete plan for each cycle length, side by side", declare_compare},
      {"sheet", "Timing sheets, diagrams and a page from plans", declare_sheet},
      {"offsets", "For experts: the bare offset engine on a problem file", declare_offsets},
  };
  return list;
}

}  // namespace entrain::cli
