# Runs GAP on freshly exported cases; the verdict is its last line, since GAP exits 0 on errors.
# -DEXPORT=export_irreps -DCHOICE=sample|all -DGAP=gap -DSCRIPT=compare_characters.g -DWORK_DIR=…
file(MAKE_DIRECTORY ${WORK_DIR})
execute_process(COMMAND ${EXPORT} ${CHOICE} OUTPUT_FILE ${WORK_DIR}/${CHOICE}.g
  COMMAND_ERROR_IS_FATAL ANY)
execute_process(COMMAND ${GAP} -q --nointeract ${WORK_DIR}/${CHOICE}.g ${SCRIPT}
  INPUT_FILE /dev/null OUTPUT_VARIABLE output ERROR_VARIABLE output)
message(STATUS "${output}")
string(STRIP "${output}" output)
if(NOT output MATCHES "\nVERDICT all [1-9][0-9]* cases agree, [0-9]+ irreps$")
  message(FATAL_ERROR "GAP does not confirm the characters")
endif()
