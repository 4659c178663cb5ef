// What the offset commands share with the review command.
#pragma once

#include <string>

#include "cli/command.hpp"

namespace entrain::cli {

// entrain review PROBLEM --certificate CERTIFICATE: re-checks the proof and prints what it proves. Returns the exit code.
int review_certificate(const std::string& problem_path, const std::string& certificate_path, const CommonOptions& common);

}  // namespace entrain::cli
