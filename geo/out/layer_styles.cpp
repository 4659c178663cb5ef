#include "geo/out/layer_styles.hpp"

#include <fmt/format.h>

namespace entrain::geo {
namespace {

std::string sld(const char* layer, const std::string& symbolizer) {
  return fmt::format(
      "<?xml version=\"1.0\" encoding=\"UTF-8\"?><StyledLayerDescriptor version=\"1.0.0\" xmlns=\"http://www.opengis.net/sld\" xmlns:ogc=\"http://www.opengis.net/ogc\">"
      "<NamedLayer><Name>{0}</Name><UserStyle><Name>{0}</Name><FeatureTypeStyle><Rule>{1}</Rule></FeatureTypeStyle></UserStyle></NamedLayer></StyledLayerDescriptor>",
      layer, symbolizer);
}

std::string line(const char* colour, double width) {
  return fmt::format("<LineSymbolizer><Stroke><CssParameter name=\"stroke\">{}</CssParameter><CssParameter name=\"stroke-width\">{}</CssParameter></Stroke></LineSymbolizer>", colour, width);
}

std::string mark(const char* shape, const char* colour, int size) {
  return fmt::format(
      "<PointSymbolizer><Graphic><Mark><WellKnownName>{}</WellKnownName><Fill><CssParameter name=\"fill\">{}</CssParameter></Fill></Mark><Size>{}</Size></Graphic></PointSymbolizer>", shape, colour,
      size);
}

std::string label(const char* field) {
  return fmt::format("<TextSymbolizer><Label><ogc:PropertyName>{}</ogc:PropertyName></Label><Font><CssParameter name=\"font-size\">12</CssParameter></Font></TextSymbolizer>", field);
}

}  // namespace

std::vector<LayerStyle> layer_styles() {
  return {
      {"junctions", sld("junctions", mark("circle", "#9a9a9a", 3))},
      {"roads", sld("roads", line("#b5b5b5", 1))},
      {"signals", sld("signals", mark("circle", "#000000", 10) + label("signal"))},
      {"approaches", sld("approaches", mark("triangle", "#555555", 6) + label("leg"))},
      {"movements", sld("movements", line("#3366aa", 0.8))},
      {"crossings", sld("crossings", mark("square", "#777777", 5))},
      {"links", sld("links", line("#7a5c00", 1.5))},
      {"corridors", sld("corridors", line("#a02020", 3))},
      {"findings", sld("findings", mark("cross", "#c00000", 9) + label("kind"))},
  };
}

}  // namespace entrain::geo
