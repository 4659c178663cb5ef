// How large the letters of a timing sheet can be so that its front stays on one page. Private to this room.
#pragma once

#include "report/document.hpp"

namespace entrain::report {

// Size in points, 6 to 11.5. `front` is the section that must fit; its height is estimated block by block with the sizes of sheet_style.
double letters_for_one_page(const Section& front, PageSize page);

}  // namespace entrain::report
