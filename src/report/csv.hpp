// Comma-separated text (RFC 4180) that opens in spreadsheets without surprises.
#pragma once

#include <string>
#include <string_view>
#include <vector>

namespace entrain::report {

// One cell. Quoted where it holds a comma, a quote, a line end or blanks at an end. A text that a spreadsheet would take for a formula
// (first character = + - @ tab or carriage return, and not a plain number or percentage) gets an apostrophe in front. Invalid UTF-8 and control
// characters become U+FFFD.
std::string csv_cell(std::string_view text);

// One row with its line end (CR LF).
std::string csv_row(const std::vector<std::string>& cells);

}  // namespace entrain::report
