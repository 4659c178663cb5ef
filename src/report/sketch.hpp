// The intersection from above: legs, a pavement arrow a movement with its phase numbers, crossings, north arrow. Not to scale.
#pragma once

#include "plan/plan.hpp"
#include "report/drawing.hpp"

namespace entrain::report {

// Protected movements have solid arrows, movements that yield in every group dashed ones. A signal without legs gives a picture that says so.
Drawing intersection_sketch(const plan::Signal& signal);

}  // namespace entrain::report
