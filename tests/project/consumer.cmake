# Builds and runs a small project that uses the library: HOW=find_package from an installed copy,
# HOW=add_subdirectory from the source tree. BUILD_TARGET=consumer_object compiles without linking.
function(run)
  execute_process(COMMAND ${ARGN} RESULT_VARIABLE code OUTPUT_VARIABLE text ERROR_VARIABLE text)
  if(NOT code EQUAL 0)
    list(JOIN ARGN " " command)
    message(FATAL_ERROR "${command}\n${text}")
  endif()
endfunction()

file(REMOVE_RECURSE ${WORK_DIR})
if(HOW STREQUAL "find_package")
  run(${CMAKE_COMMAND} --install ${BUILD_DIR} --prefix ${WORK_DIR}/installed)
  run(${WORK_DIR}/installed/bin/spinsieve --version)
endif()
run(${CMAKE_COMMAND} -S ${CMAKE_CURRENT_LIST_DIR}/consumer -B ${WORK_DIR}/build -G ${GENERATOR}
  -DCMAKE_BUILD_TYPE=Debug -DHOW=${HOW} -DSPINSIEVE_SOURCE=${SOURCE_DIR}
  -DCMAKE_PREFIX_PATH=${WORK_DIR}/installed)
run(${CMAKE_COMMAND} --build ${WORK_DIR}/build --target ${BUILD_TARGET})
if(BUILD_TARGET STREQUAL "consumer")
  run(${WORK_DIR}/build/consumer)
endif()
file(REMOVE_RECURSE ${WORK_DIR})
