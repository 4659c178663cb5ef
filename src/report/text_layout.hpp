// How much room a text takes, and where to put many labels without overlap.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "report/drawing.hpp"

namespace entrain::report {

// Width in drawing units of `text` set at `size` in a wide sans-serif face: an estimate from above for the faces that are usual on
// desktops.
double text_width(std::string_view text, double size, bool strong = false);

// `text` cut at a character so that it fits into `width`, with an ellipsis where something was cut. Control characters become U+FFFD,
// line ends blanks.
std::string fitted(std::string_view text, double size, double width, bool strong = false);

// `text` in lines of at most `width`, broken at blanks, inside words only where a word alone is too wide; the last of `most` lines is cut.
std::vector<std::string> wrapped(std::string_view text, double size, double width, std::size_t most);

// Keeps a text that runs right to left from turning its neighbours round. Others are returned as they are.
std::string isolated(std::string_view text);

// Centres of labels of height `height` on a line, in the order given, as near as possible (least squares) to `wanted` (ascending), at
// least `height` apart, all inside [low, high] where that has room for them; otherwise evenly spread with less room.
std::vector<double> spread(const std::vector<double>& wanted, double height, double low, double high);

// Remembers what is taken and finds free places.
class LabelPlacer {
 public:
  explicit LabelPlacer(Box frame) : m_frame(frame) {}
  void block(const Box& box) { m_taken.push_back(box); }
  bool is_free(const Box& box, double margin = 1) const;
  // Takes the first candidate inside the frame that touches nothing; returns its index, -1 if none is free.
  int place(const std::vector<Box>& candidates, double margin = 1);

 private:
  Box m_frame;
  std::vector<Box> m_taken;
};

}  // namespace entrain::report
