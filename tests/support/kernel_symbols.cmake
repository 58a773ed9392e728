# Every symbol that the AVX2 build of the step kernel defines must be its table or lie in its own namespace: an inline
# function that other code defines too could be linked from here and fail on a processor without AVX2.
execute_process(COMMAND ${NM} --defined-only --extern-only --demangle ${OBJECTS}
  OUTPUT_VARIABLE listing RESULT_VARIABLE failed)
if(failed)
  message(FATAL_ERROR "${NM} ${OBJECTS}: ${failed}")
endif()
string(REPLACE "\n" ";" lines "${listing}")
set(own 0)
foreach(line IN LISTS lines)
  # "address type name"; a return type may stand before the name
  if(line MATCHES "^[0-9a-f]+ [A-Za-z] ([a-z]+ )?hearthfront::solver::(avx2_fma_kernel$|avx2_fma::)")
    math(EXPR own "${own} + 1")
  elseif(line MATCHES "^[0-9a-f]+ [A-Za-z] (.*)$" AND NOT CMAKE_MATCH_1 MATCHES "^hearthfront::solver::avx2_fma::")
    set(strangers "${strangers}\n  ${CMAKE_MATCH_1}")
  endif()
endforeach()
if(strangers)
  message(FATAL_ERROR "defined outside hearthfront::solver::avx2_fma by the AVX2 build of the kernel:${strangers}")
endif()
if(own EQUAL 0)
  message(FATAL_ERROR "no symbol of the kernel found in ${OBJECTS}")
endif()
message(STATUS "${own} symbols, all of the kernel's own")
