// Everything a project names, read from disk: project file, tables, roads, elevation, standard. Shared by import, draft and compare.
#pragma once

#include <string>

#include "base/result.hpp"
#include "drafting/inputs.hpp"

namespace entrain::cli {

// `path` is a project.toml or the folder that holds one. All problems of all files at once where one does not hide the next.
[[nodiscard]] Result<Noted<drafting::Inputs>> load_project(const std::string& path);

}  // namespace entrain::cli
