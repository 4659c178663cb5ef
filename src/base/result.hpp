// A value or the list of everything that stood in its way. Functions that return one are [[nodiscard]].
#pragma once

#include <tl/expected.hpp>
#include <utility>

#include "base/diagnostic.hpp"

namespace entrain {

template <class T>
using Result = tl::expected<T, Diagnostics>;

inline tl::unexpected<Diagnostics> failure(Diagnostics diagnostics) { return tl::unexpected<Diagnostics>(std::move(diagnostics)); }
inline tl::unexpected<Diagnostics> failure(Diagnostic diagnostic) { return tl::unexpected<Diagnostics>(Diagnostics{std::move(diagnostic)}); }

// A value together with what was noticed on the way (warnings and notes, never errors).
template <class T>
struct Noted {
  T value;
  Diagnostics notes;
};

}  // namespace entrain
