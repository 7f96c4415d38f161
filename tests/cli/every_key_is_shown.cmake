# SPDX-License-Identifier: Apache-2.0
# Every key of the netlist has a help text, stands in the README's reference and is used by an example or a test;
# every kind has an example in the help.
#
#   cmake -D SUNDER=<program> -D PROJECT=<root> -P every_key_is_shown.cmake
cmake_minimum_required(VERSION 3.25)

execute_process(COMMAND "${SUNDER}" help netlist --json OUTPUT_VARIABLE help RESULT_VARIABLE status)
if(NOT status EQUAL 0)
  message(FATAL_ERROR "sunder help netlist --json ended with ${status}")
endif()
file(READ "${PROJECT}/README.md" readme)

# What uses keys: netlists, the cells' headings of schedules, and the netlists inside cases and test programs.
file(GLOB_RECURSE users "${PROJECT}/examples/*.toml" "${PROJECT}/examples/*.csv" "${PROJECT}/tests/*.case"
  "${PROJECT}/tests/*.cpp" "${PROJECT}/tests/*.toml" "${PROJECT}/tests/*.csv")
set(uses "")
foreach(file IN LISTS users)
  file(READ "${file}" text)
  string(APPEND uses "${text}\n")
endforeach()

set(complaints 0)
function(complain)
  message(NOTICE "${ARGV0}")
  math(EXPR n "${complaints} + 1")
  set(complaints ${n} PARENT_SCOPE)
endfunction()

string(JSON sections LENGTH "${help}" sections)
math(EXPR last_section "${sections} - 1")
set(keys 0)
foreach(i RANGE ${last_section})
  string(JSON heading GET "${help}" sections ${i} heading)
  string(JSON entries LENGTH "${help}" sections ${i} entries)
  if(entries EQUAL 0)
    continue()  # a note, no kind
  endif()
  string(JSON example GET "${help}" sections ${i} example)
  if(example STREQUAL "")
    complain("${heading}: no example in the help")
  endif()
  math(EXPR last_entry "${entries} - 1")
  foreach(j RANGE ${last_entry})
    string(JSON name GET "${help}" sections ${i} entries ${j} name)
    string(JSON meaning GET "${help}" sections ${i} entries ${j} text)
    string(LENGTH "${meaning}" length)
    math(EXPR keys "${keys} + 1")
    if(length LESS 15)
      complain("${heading} ${name}: no help")
    endif()
    # As a key of TOML (name =) or a heading of a schedule (,name, or ,name [unit]).
    if(NOT uses MATCHES "[^a-zA-Z0-9_]${name} *=" AND NOT uses MATCHES ",${name}( \\[[^]]*\\])?[,\n]")
      complain("${heading} ${name}: no example and no test uses it")
    endif()
    string(FIND "${readme}" "`${name}`" found)
    if(found EQUAL -1)
      complain("${heading} ${name}: not in the README")
    endif()
  endforeach()
endforeach()
if(keys LESS 60)
  complain("the help lists only ${keys} keys")
endif()

# The README shows its examples as they are.
foreach(file IN ITEMS examples/boathouse/boathouse.toml examples/boathouse/expected-check.txt)
  file(READ "${PROJECT}/${file}" shown)
  string(FIND "${readme}" "${shown}" found)
  if(found EQUAL -1)
    complain("README.md does not show ${file} as it is (examples/expected puts it there)")
  endif()
endforeach()

if(complaints GREATER 0)
  message(FATAL_ERROR "${complaints} complaint(s)")
endif()
