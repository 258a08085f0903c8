# Every stage is an object library spinsieve_<stage>, gathered into the library spinsieve.
# A stage's tests link its own objects and those of earlier stages only, so that a dependency
# against the data flow does not even link.

# A stage looks for its carriers in its own folder; the tests and the program link them too.
set(CMAKE_FIND_PACKAGE_TARGETS_GLOBAL ON)

add_library(spinsieve_options INTERFACE)
target_compile_features(spinsieve_options INTERFACE cxx_std_20)
target_include_directories(spinsieve_options INTERFACE ${PROJECT_SOURCE_DIR}/lib)
target_compile_options(spinsieve_options INTERFACE
  -Wall -Wextra -Wpedantic -Wshadow -Wconversion -Wsign-conversion -Wold-style-cast
  $<$<CXX_COMPILER_ID:GNU>:-Wno-restrict>)  # g++ 12 misreads "text" + string (GCC bug 105651).
# Instrumented code makes g++ warn of what is not there; the plain build is the judge.
if(PROJECT_IS_TOP_LEVEL AND NOT SPINSIEVE_SANITIZE)
  target_compile_options(spinsieve_options INTERFACE $<$<CXX_COMPILER_ID:GNU>:-Werror>)
endif()
if(SPINSIEVE_SANITIZE)
  add_compile_options(-fsanitize=address,undefined -fno-sanitize-recover=all -fno-omit-frame-pointer)
  add_link_options(-fsanitize=address,undefined)
endif()

# spinsieve_stage(<stage> SOURCES a.cpp … HEADERS a.hpp … [LIBRARIES Eigen3::Eigen …])
function(spinsieve_stage stage)
  cmake_parse_arguments(PARSE_ARGV 1 arg "" "" "SOURCES;HEADERS;LIBRARIES")
  add_library(spinsieve_${stage} OBJECT ${arg_SOURCES})
  set_target_properties(spinsieve_${stage} PROPERTIES POSITION_INDEPENDENT_CODE ON
    SPINSIEVE_LIBRARIES "${arg_LIBRARIES}")
  target_link_libraries(spinsieve_${stage} PRIVATE spinsieve_options ${arg_LIBRARIES})
  target_sources(spinsieve PRIVATE $<TARGET_OBJECTS:spinsieve_${stage}>)
  list(TRANSFORM arg_HEADERS PREPEND ${CMAKE_CURRENT_SOURCE_DIR}/)
  target_sources(spinsieve PUBLIC FILE_SET HEADERS BASE_DIRS ${PROJECT_SOURCE_DIR}/lib
    FILES ${arg_HEADERS})
  foreach(carrier IN LISTS arg_LIBRARIES)
    get_target_property(kind ${carrier} TYPE)
    if(carrier STREQUAL "Eigen3::Eigen")  # The only carrier in our headers.
      target_link_libraries(spinsieve PUBLIC ${carrier})
    elseif(NOT kind STREQUAL "INTERFACE_LIBRARY")  # Header-only carriers are compiled in.
      target_link_libraries(spinsieve PRIVATE ${carrier})
      set_property(TARGET spinsieve APPEND PROPERTY SPINSIEVE_CARRIERS ${carrier})
    endif()
  endforeach()
endfunction()

# The objects and libraries of a stage and all stages before it.
function(spinsieve_link_stages target last)
  target_link_libraries(${target} PRIVATE spinsieve_options)
  foreach(stage IN LISTS SPINSIEVE_STAGES)
    get_target_property(libraries spinsieve_${stage} SPINSIEVE_LIBRARIES)
    target_sources(${target} PRIVATE $<TARGET_OBJECTS:spinsieve_${stage}>)
    if(libraries)
      target_link_libraries(${target} PRIVATE ${libraries})
    endif()
    if(stage STREQUAL last)
      return()
    endif()
  endforeach()
  message(FATAL_ERROR "${target}: no stage is called '${last}'")
endfunction()

# spinsieve_tests(<name> <last stage> file_test.cpp …): one test executable, each of its tests known
# to ctest. Tests whose name contains "Slow" carry the label "slow".
function(spinsieve_tests name last)
  if(NOT ARGN)
    return()
  endif()
  add_executable(${name}_tests ${ARGN})
  spinsieve_link_stages(${name}_tests ${last})
  target_link_libraries(${name}_tests PRIVATE GTest::gmock GTest::gtest_main)
  # What is tested is the library, built as it ships; the tests themselves need no more than this.
  target_compile_options(${name}_tests PRIVATE $<$<CONFIG:Release>:-O1>)
  target_compile_definitions(${name}_tests PRIVATE SPINSIEVE_SOURCE_DIR="${PROJECT_SOURCE_DIR}")
  gtest_discover_tests(${name}_tests TEST_PREFIX ${name}. TEST_FILTER "-*Slow*"
    DISCOVERY_TIMEOUT 120 PROPERTIES TIMEOUT 600)
  gtest_discover_tests(${name}_tests TEST_PREFIX ${name}. TEST_FILTER "*Slow*"
    DISCOVERY_TIMEOUT 120 PROPERTIES TIMEOUT 1800 LABELS slow)
endfunction()

# spinsieve_embed(<stage> <variable prefix> files…): each file becomes a std::string_view
# named <prefix>_<stem> in namespace spinsieve, declared in "<stage>/embedded_<prefix>.hpp" of the
# build tree. The bytes are compiled in; nothing is looked up at run time.
function(spinsieve_embed stage prefix)
  set(dir ${CMAKE_CURRENT_BINARY_DIR}/embedded)
  set(header "#pragma once\n\n#include <string_view>\n\nnamespace spinsieve {\n")
  foreach(file IN LISTS ARGN)
    cmake_path(GET file STEM stem)
    set_property(DIRECTORY APPEND PROPERTY CMAKE_CONFIGURE_DEPENDS ${file})
    file(READ ${file} hex HEX)
    string(REGEX REPLACE "([0-9a-f][0-9a-f])" "0x\\1," bytes "${hex}")
    file(CONFIGURE OUTPUT ${dir}/${prefix}_${stem}.cpp CONTENT
      "#include \"${stage}/embedded_${prefix}.hpp\"\n\nnamespace spinsieve {\nnamespace {\nconst unsigned char bytes[] = {@bytes@0};\n}  // namespace\nconst std::string_view ${prefix}_${stem}(reinterpret_cast<const char*>(bytes), sizeof bytes - 1);\n}  // namespace spinsieve\n"
      @ONLY)
    target_sources(spinsieve_${stage} PRIVATE ${dir}/${prefix}_${stem}.cpp)
    string(APPEND header "extern const std::string_view ${prefix}_${stem};\n")
  endforeach()
  file(CONFIGURE OUTPUT ${dir}/${stage}/embedded_${prefix}.hpp
    CONTENT "${header}}  // namespace spinsieve\n" @ONLY)
  target_include_directories(spinsieve_${stage} PRIVATE ${dir})
endfunction()
