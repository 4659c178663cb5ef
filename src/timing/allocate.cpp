#include "timing/allocation.hpp"
#include "timing/allocation_parts.hpp"
#include "timing/general_allocation.hpp"
#include "timing/ring_allocation.hpp"

namespace entrain::timing {
Result<std::vector<Allocation>> allocate(const SignalDesign& design, const AllocationRequest& request) {
  Diagnostics wrong = request_errors(design, request);
  if (!wrong.empty()) return failure(std::move(wrong));
  return design.ring_barrier ? allocate_rings(design, request) : allocate_general(design, request);
}

}  // namespace entrain::timing
