// A review for people and for programs. The first line is the verdict on safety.
#pragma once

#include <string>
#include <vector>

#include "review/review.hpp"

namespace entrain::review {

std::string to_text(const Review& review, const std::string& name);
// One object: "safety", "why", "violations", "warnings", "findings", "bands", "signals", "unchecked". Text that is no UTF-8 is replaced.
std::string to_json(const Review& review, const std::string& name);

const char* word(Safety safety);
const char* word(Severity severity);

}  // namespace entrain::review
