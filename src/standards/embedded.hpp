// The design standards that come with the program, so that it finds them wherever it is installed.
#pragma once

#include <optional>
#include <string_view>
#include <vector>

namespace entrain::standards {

std::optional<std::string_view> embedded_standard(std::string_view id);
std::vector<std::string_view> embedded_standard_ids();

}  // namespace entrain::standards
