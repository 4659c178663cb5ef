// The document model: what a sheet or page says, as plain data. Writers turn it into HTML, CSV or terminal text.
#pragma once

#include <string>
#include <utility>
#include <variant>
#include <vector>

#include "report/drawing.hpp"

namespace entrain::report {

// A file to be written by the caller: path relative to the output folder, with slashes.
struct OutputFile {
  std::string path;
  std::string bytes;
};

enum class Align { left, right, centre };

struct Cell {
  std::string text;
  std::string beside;   // said smaller after the text: "was 50"
  bool strong = false;
  Cell() = default;
  Cell(std::string t, std::string b = {}, bool s = false) : text(std::move(t)), beside(std::move(b)), strong(s) {}  // NOLINT: a text is a cell
  Cell(const char* t) : text(t) {}                                                                                  // NOLINT
};

struct Column {
  std::string name;
  Align align = Align::left;
};

struct Table {
  std::string role, title;
  std::vector<Column> columns;
  std::vector<std::vector<Cell>> rows;
  std::string note;  // below the table
};

struct Heading {
  int level = 2;  // 1..3
  std::string text;
};

struct Paragraph {
  std::string text;
  std::string role;
};

// What must be seen first, in large letters.
struct Notice {
  std::string text, detail;
  std::string role;
};

struct Fact {
  std::string label, value, beside;
  std::string role;
};

struct Facts {
  std::string role, title;
  std::vector<Fact> facts;
};

struct List {
  std::string role, title;
  std::vector<std::string> items;
};

struct Figure {
  std::string role, id;  // id: letters, digits and dashes; unique in the document
  Drawing drawing;
};

// Links to files beside the document: path and what it is.
struct Links {
  std::string title;
  std::vector<std::pair<std::string, std::string>> targets;
};

struct Block;
struct Section {
  std::string role;
  std::vector<Block> blocks;
};

struct Block {
  std::variant<Heading, Paragraph, Notice, Facts, Table, List, Figure, Links, Section> content;
};

enum class PageSize { a4, letter };

struct Document {
  std::string title;
  std::vector<Block> blocks;
};

struct HtmlOptions {
  PageSize page = PageSize::a4;
  bool landscape = false;
  double letters_pt = 11;     // size of ordinary text
  std::string extra_style;    // written in this project, never a text from outside
};

// One self-contained page: no script, no file beside it.
std::string html(const Document& document, const HtmlOptions& options);

// Rows of all facts, tables and lists; the first cell of each row names its block.
std::string csv(const Document& document);
// Header and rows alone.
std::string csv(const Table& table);

// For a terminal: aligned columns, the header underlined. Numbers of cells beside stand in brackets.
std::string terminal_text(const Table& table);

// Names of files for `ids`, in their order: letters, digits, dashes and underscores alone, no name twice also where case does not count,
// never a name that a system reserves.
std::vector<std::string> file_names(const std::vector<std::string>& ids);

}  // namespace entrain::report
