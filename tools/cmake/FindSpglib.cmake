# spglib ships neither a CMake package nor a usable pkg-config file on Debian 12.
find_path(Spglib_INCLUDE_DIR spglib.h)
find_library(Spglib_LIBRARY NAMES symspg)
include(FindPackageHandleStandardArgs)
find_package_handle_standard_args(Spglib REQUIRED_VARS Spglib_LIBRARY Spglib_INCLUDE_DIR)
if(Spglib_FOUND AND NOT TARGET Spglib::symspg)
  add_library(Spglib::symspg UNKNOWN IMPORTED)
  set_target_properties(Spglib::symspg PROPERTIES IMPORTED_LOCATION ${Spglib_LIBRARY}
    INTERFACE_INCLUDE_DIRECTORIES ${Spglib_INCLUDE_DIR})
endif()
