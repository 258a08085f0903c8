# Each of these lines must make stage_order.cmake fail, and a sound tree must pass.
cmake_minimum_required(VERSION 3.25)

function(expect result file line)
  file(REMOVE_RECURSE ${WORK_DIR})
  file(WRITE ${WORK_DIR}/lib/${file} "${line}\n")
  execute_process(COMMAND ${CMAKE_COMMAND} -DSOURCE_DIR=${WORK_DIR} "-DSTAGES=${STAGES}"
    -P ${CMAKE_CURRENT_LIST_DIR}/stage_order.cmake RESULT_VARIABLE code ERROR_VARIABLE text)
  if((result STREQUAL "sound" AND NOT code EQUAL 0) OR
     (result STREQUAL "fault" AND (code EQUAL 0 OR NOT text MATCHES "${file} (includes|brings|must)")))
    message(SEND_ERROR "${file} with '${line}' must count as ${result}")
  endif()
endfunction()

expect(sound symmetry/star.cpp "#include \"crystal/cell.hpp\"")
expect(sound input/yaml.cpp "#include <yaml-cpp/yaml.h>")
expect(sound scattering/line.hpp "#include <Eigen/Core>")
expect(sound crystal/spglib.cpp "#include <spglib.h>")
expect(fault symmetry/star.cpp "#include \"modes/moment_field.hpp\"")
expect(fault input/job.hpp "#include <yaml-cpp/yaml.h>")
expect(fault ranking/fit.cpp "#include <nlohmann/json.hpp>")
expect(fault exact/fraction.hpp "#include <boost/multiprecision/cpp_int.hpp>")
expect(fault modes/basis.hpp "#include <Eigen/Core>")
expect(fault crystal/cell.cpp "#include <iostream>")
expect(fault crystal/cell.cpp "#include <spglib.h>")
file(REMOVE_RECURSE ${WORK_DIR})
