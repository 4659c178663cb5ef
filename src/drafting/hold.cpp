#include "drafting/hold.hpp"

namespace entrain::drafting {

tl::expected<Noted<Draft>, DraftProblem> draft_held(const Inputs&, const DraftOptions&) {
  return tl::unexpected(DraftProblem{{error("--hold", "not there yet", "", "")}, false});
}

}  // namespace entrain::drafting
