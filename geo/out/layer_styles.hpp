// Styles stored with the layers (OGC Styled Layer Descriptor 1.0), so that the file opens readable.
#pragma once

#include <string>
#include <vector>

namespace entrain::geo {

struct LayerStyle {
  const char* layer;
  std::string sld;
};

std::vector<LayerStyle> layer_styles();

}  // namespace entrain::geo
