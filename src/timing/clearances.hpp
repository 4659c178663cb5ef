// Yellow, red clearance, minimum green, walk and pedestrian clearance of every group by the design standard, the project's exceptions,
// and the intergreens that follow.
#pragma once

#include "timing/grouping.hpp"

namespace entrain::timing {

struct ClearanceInput {
  const network::Signal& signal;
  const Streams& streams;
  const standards::DesignStandard& standard;
  const DesignRequest& request;
};

// Metres from the stop line to the far edge of the last conflict on the movement's path, from leg widths.
double clearing_width_m(const network::Signal& signal, const network::Movement& movement);

// Fills times of all groups. Errors: values that are no times, exceptions shorter than the standard without reason and author,
// exceptions that name nothing.
Diagnostics set_times(const ClearanceInput& input, SignalDesign& design, Diagnostics& notes);

// Intergreens of the design's conflicts from its groups: yellow + red clearance after vehicles, the standard's buffer after people.
void set_intergreens(const standards::DesignStandard& standard, SignalDesign& design);

// Vehicle groups: green + yellow + red clearance that the people who run with them need. Walk and clearance end with the green.
void set_pedestrian_needs(const standards::DesignStandard& standard, SignalDesign& design);

}  // namespace entrain::timing
