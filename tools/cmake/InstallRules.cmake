# find_package(spinsieve) from an installed copy gives the target spinsieve::spinsieve.
include(GNUInstallDirs)
include(CMakePackageConfigHelpers)

set(package_dir ${CMAKE_INSTALL_LIBDIR}/cmake/spinsieve)
install(TARGETS spinsieve EXPORT spinsieve-targets
  FILE_SET HEADERS DESTINATION ${CMAKE_INSTALL_INCLUDEDIR}/spinsieve)
install(EXPORT spinsieve-targets NAMESPACE spinsieve:: DESTINATION ${package_dir})

# A static library hands its compiled carriers on to whoever links it.
set(package_of_Spglib::symspg Spglib)
set(package_of_fmt::fmt fmt)
set(package_of_yaml-cpp yaml-cpp)
get_target_property(carriers spinsieve SPINSIEVE_CARRIERS)
list(REMOVE_DUPLICATES carriers)
set(SPINSIEVE_DEPENDENCIES "find_dependency(Eigen3 NO_MODULE)\n")
foreach(carrier IN LISTS carriers)
  if(NOT DEFINED package_of_${carrier})
    message(FATAL_ERROR "InstallRules.cmake does not know the package of the carrier ${carrier}")
  endif()
  string(APPEND SPINSIEVE_DEPENDENCIES "find_dependency(${package_of_${carrier}})\n")
endforeach()

configure_package_config_file(${PROJECT_SOURCE_DIR}/tools/cmake/spinsieve-config.cmake.in
  ${PROJECT_BINARY_DIR}/spinsieve-config.cmake INSTALL_DESTINATION ${package_dir})
write_basic_package_version_file(${PROJECT_BINARY_DIR}/spinsieve-config-version.cmake
  COMPATIBILITY SameMinorVersion)
install(FILES ${PROJECT_BINARY_DIR}/spinsieve-config.cmake
  ${PROJECT_BINARY_DIR}/spinsieve-config-version.cmake
  ${PROJECT_SOURCE_DIR}/tools/cmake/FindSpglib.cmake DESTINATION ${package_dir})

if(SPINSIEVE_PROGRAM)
  install(TARGETS spinsieve_program)
endif()
