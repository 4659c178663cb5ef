// The design standards that come with the program, so that it finds them wherever it is installed.
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "standards/design_standard.hpp"

namespace entrain::standards {

std::optional<std::string_view> embedded_standard(std::string_view id);
std::vector<std::string_view> embedded_standard_ids();

// The standard read; an unknown id is an error at `where` that lists the known ones.
[[nodiscard]] Result<DesignStandard> find_standard(const std::string& id, const std::string& where);

}  // namespace entrain::standards
