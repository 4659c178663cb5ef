// Grades from an elevation raster.
#pragma once

#include <string>

#include "base/result.hpp"
#include "network/network.hpp"

namespace entrain::geo {

// Sets the mean grade of every road and of every leg (grade_in) and link. Heights are bilinear between cell centres and smoothed over about 60 m along
// the road, so that the raster's noise does not become grade; bridges and tunnels are not sampled (grade 0). Grades are cut at 20 %.
// Errors: missing or unreadable raster, no coordinate system. A raster that does not cover a road leaves its grade 0 and is noted once.
[[nodiscard]] Result<Noted<network::Network>> with_grades(network::Network network, const std::string& raster_path);

}  // namespace entrain::geo
