#include "report/version.hpp"

namespace spinsieve {

std::string_view version() { return SPINSIEVE_VERSION; }

}  // namespace spinsieve
