#include "project/count_heading.hpp"

#include <algorithm>
#include <map>

#include "project/table_reader.hpp"

namespace entrain::project {
namespace {

const std::map<std::string, std::string>& turn_words() {
  static const std::map<std::string, std::string> words = {{"l", "L"},       {"left", "L"},  {"lt", "L"},  {"lefts", "L"}, {"t", "T"},      {"th", "T"},  {"thru", "T"}, {"through", "T"},
                                                           {"straight", "T"}, {"r", "R"},    {"rt", "R"},  {"right", "R"}, {"rights", "R"}, {"u", "U"},   {"ut", "U"},   {"uturn", "U"}};
  return words;
}

// "nb", "northbound" -> NB; "n", "north" -> N, bare.
const std::map<std::string, std::string>& direction_words() {
  static const std::map<std::string, std::string> words = [] {
    std::map<std::string, std::string> all;
    const std::pair<const char*, const char*> names[] = {{"n", "north"}, {"e", "east"}, {"s", "south"}, {"w", "west"}, {"ne", "northeast"}, {"se", "southeast"}, {"sw", "southwest"}, {"nw", "northwest"}};
    for (const auto& [letters, name] : names) {
      std::string upper = letters;
      std::transform(upper.begin(), upper.end(), upper.begin(), [](char c) { return static_cast<char>(c - 32); });
      all[letters] = all[name] = upper;
      all[letters + std::string("b")] = all[name + std::string("bound")] = upper + "B";
    }
    return all;
  }();
  return words;
}

std::optional<CountClass> class_of(const std::string& word) {
  static const std::map<std::string, CountClass> words = {{"cars", CountClass::light},     {"car", CountClass::light},      {"light", CountClass::light},   {"lights", CountClass::light},
                                                          {"auto", CountClass::light},     {"autos", CountClass::light},    {"truck", CountClass::heavy},   {"trucks", CountClass::heavy},
                                                          {"bus", CountClass::heavy},      {"buses", CountClass::heavy},    {"heavy", CountClass::heavy},   {"heavies", CountClass::heavy},
                                                          {"hv", CountClass::heavy},       {"total", CountClass::total},    {"volume", CountClass::total},  {"vol", CountClass::total},
                                                          {"vehicles", CountClass::total}, {"vehicle", CountClass::total},  {"veh", CountClass::total},     {"count", CountClass::total}};
  const auto found = words.find(word);
  return found == words.end() ? std::nullopt : std::optional<CountClass>(found->second);
}

std::vector<std::string> tokens_of(const std::string& heading) {
  std::vector<std::string> tokens(1);
  for (const char c : heading_name(heading)) {
    if (c == '_' || c == '.' || c == '/' || c == ':' || c == '(' || c == ')') tokens.emplace_back();
    else tokens.back() += c;
  }
  tokens.erase(std::remove(tokens.begin(), tokens.end(), std::string()), tokens.end());
  if (tokens.size() > 1 && tokens[tokens.size() - 2] == "u" && tokens.back() == "turn") tokens.pop_back();
  return tokens;
}

// "nbl" -> "nb" "l": one word that is a direction with a turn behind it.
std::vector<std::string> split_word(const std::string& word) {
  for (std::size_t length = std::min<std::size_t>(3, word.size() - 1); length > 0; --length)
    if (direction_words().count(word.substr(0, length)) != 0 && turn_words().count(word.substr(length)) != 0) return {word.substr(0, length), word.substr(length)};
  return {word};
}

}  // namespace

std::optional<MovementColumn> movement_column(const std::string& heading) {
  std::vector<std::string> tokens = tokens_of(heading);
  if (tokens.size() == 1 && !tokens[0].empty()) tokens = split_word(tokens[0]);
  if (tokens.size() < 2 || tokens.size() > 4) return std::nullopt;
  MovementColumn column;
  for (const std::string& token : tokens) {
    const auto direction = direction_words().find(token), turn = turn_words().find(token);
    if (direction != direction_words().end() && column.approach.empty()) column.approach = direction->second;
    else if (turn != turn_words().end() && column.turn.empty()) column.turn = turn->second;
    else if (const auto counted = class_of(token)) column.counted = *counted;
    else return std::nullopt;
  }
  if (column.approach.empty() || column.turn.empty()) return std::nullopt;
  column.bare = column.approach.back() != 'B';
  return column;
}

std::string turn_alone(const std::string& heading) {
  const std::vector<std::string> tokens = tokens_of(heading);
  const auto turn = tokens.size() == 1 ? turn_words().find(tokens[0]) : turn_words().end();
  return turn == turn_words().end() ? std::string() : turn->second;
}

bool is_direction_alone(const std::string& heading) {
  const std::vector<std::string> tokens = tokens_of(heading);
  return tokens.size() == 1 && direction_words().count(tokens[0]) != 0;
}

}  // namespace entrain::project
