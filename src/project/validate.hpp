// Checks across tables and project file that no single reader can make.
#pragma once

#include "base/diagnostic.hpp"
#include "project/project.hpp"
#include "project/tables.hpp"

namespace entrain::project {

// Unknown signals and periods, duplicates, offsets without their instant, clearances that differ between periods. Errors and warnings, in order.
Diagnostics validate(const Project& project, const Tables& tables);

}  // namespace entrain::project
