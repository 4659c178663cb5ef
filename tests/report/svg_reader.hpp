// Reads back what an SVG file says: the shapes with their roles and numbers, as a viewer would, independent of the drawing that made it.
#pragma once

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <map>
#include <regex>
#include <string>
#include <vector>

#include "base/number_text.hpp"
#include "report/text_layout.hpp"

namespace entrain::report::tests {

struct Element {
  std::string name;
  std::map<std::string, std::string> attributes;
  std::string text;
  std::string role() const { return attributes.count("class") != 0 ? attributes.at("class") : ""; }
  double number(const std::string& key) const { return parse_number(attributes.count(key) != 0 ? attributes.at(key) : "0").value_or(NAN); }
};

inline std::string plain(std::string text) {
  const std::pair<const char*, const char*> entities[] = {{"&lt;", "<"}, {"&gt;", ">"}, {"&quot;", "\""}, {"&#39;", "'"}, {"&amp;", "&"}};
  for (const auto& [entity, letter] : entities)
    for (auto at = text.find(entity); at != std::string::npos; at = text.find(entity, at + 1)) text.replace(at, std::string(entity).size(), letter);
  return text;
}

// Elements after the definitions of patterns.
inline std::vector<Element> elements_of(const std::string& svg) {
  static const std::regex attribute("([\\w-]+)=\"([^\"]*)\"");
  std::vector<Element> elements;
  const auto defs = svg.find("</defs>");
  for (auto at = svg.find('<', defs == std::string::npos ? 0 : defs + 7); at != std::string::npos; at = svg.find('<', at + 1)) {
    const auto end = svg.find('>', at);
    const std::string inside = svg.substr(at + 1, end - at - 1);
    if (inside.empty() || inside[0] == '/' || inside[0] == '?') continue;
    Element element;
    element.name = inside.substr(0, inside.find_first_of(" /"));
    for (std::sregex_iterator it(inside.begin(), inside.end(), attribute), none; it != none; ++it) element.attributes[(*it)[1]] = (*it)[2];
    element.text = plain(svg.substr(end + 1, svg.find('<', end) - end - 1));
    elements.push_back(std::move(element));
  }
  return elements;
}

inline std::vector<double> numbers_of(const std::string& text) {
  static const std::regex number("-?[0-9]+(\\.[0-9]+)?|nan|inf");
  std::vector<double> numbers;
  for (std::sregex_iterator it(text.begin(), text.end(), number), none; it != none; ++it) numbers.push_back(parse_number(it->str()).value_or(NAN));
  return numbers;
}

struct Place {
  double x = 0, y = 0;
};

inline std::vector<Place> places_of(const Element& e) {
  std::vector<Place> places;
  const auto pairs = [&](const std::string& text) {
    const auto n = numbers_of(text);
    for (std::size_t i = 0; i + 1 < n.size(); i += 2) places.push_back({n[i], n[i + 1]});
  };
  if (e.name == "line") places = {{e.number("x1"), e.number("y1")}, {e.number("x2"), e.number("y2")}};
  if (e.name == "rect") places = {{e.number("x"), e.number("y")}, {e.number("x") + e.number("width"), e.number("y") + e.number("height")}};
  if (e.name == "circle") places = {{e.number("cx"), e.number("cy")}};
  if (e.name == "polygon" || e.name == "polyline") pairs(e.attributes.at("points"));
  if (e.name == "path") pairs(e.attributes.at("d"));
  if (e.name == "text") places = {{e.number("x"), e.number("y")}};
  return places;
}

inline Box text_box(const Element& e) {
  const double size = e.number("font-size"), width = text_width(e.text, size, e.attributes.count("font-weight") != 0);
  const std::string anchor = e.attributes.count("text-anchor") != 0 ? e.attributes.at("text-anchor") : "start";
  const double left = e.number("x") - (anchor == "end" ? width : anchor == "middle" ? width / 2 : 0);
  return {left, e.number("y") - 0.8 * size, width, size};
}

inline Box view_of(const std::string& svg) {
  const auto at = svg.find("viewBox=\"");
  REQUIRE(at != std::string::npos);
  const auto n = numbers_of(svg.substr(at + 9, svg.find('"', at + 9) - at - 9));
  return {n[0], n[1], n[2], n[3]};
}

// Every coordinate finite and inside the view; every text inside it; no two texts on each other.
inline void check_picture(const std::string& svg) {
  const Box view = view_of(svg);
  std::vector<Element> texts;
  for (const Element& e : elements_of(svg)) {
    for (const Place& p : places_of(e)) {
      INFO(e.name << " " << e.role() << " at " << p.x << " " << p.y);
      CHECK((std::isfinite(p.x) && std::isfinite(p.y)));
      CHECK(is_inside({p.x, p.y, 0, 0}, view, 0.02));
    }
    if (e.name == "text") texts.push_back(e);
  }
  for (std::size_t i = 0; i < texts.size(); ++i) {
    INFO(texts[i].text);
    CHECK(is_inside(text_box(texts[i]), view, 0.5));
    for (std::size_t j = i + 1; j < texts.size(); ++j) {
      INFO(texts[j].text);
      CHECK_FALSE(overlap(text_box(texts[i]), text_box(texts[j]), -0.5));
    }
  }
}

}  // namespace entrain::report::tests
