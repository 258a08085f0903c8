#pragma once

#include <string_view>

namespace spinsieve {

std::string_view version();  ///< "0.1.0", of the library that was linked.

}  // namespace spinsieve
