# SPDX-License-Identifier: Apache-2.0
# Colour and progress are for a terminal: none in a pipe, none in a file, no colour where NO_COLOR is set.
#
#   cmake -D SUNDER=<program> -D FOLDER=<scratch> -P terminal.cmake
cmake_minimum_required(VERSION 3.25)

file(REMOVE_RECURSE "${FOLDER}")
file(MAKE_DIRECTORY "${FOLDER}")
set(ENV{TERM} xterm)
unset(ENV{NO_COLOR})
string(ASCII 27 escape)
set(complaints 0)

macro(expect what text wanted character)
  string(FIND "${text}" "${character}" found)
  if((found GREATER -1 AND NOT ${wanted}) OR (found EQUAL -1 AND ${wanted}))
    message(NOTICE "${what}: expected ${wanted}\n${text}")
    math(EXPR complaints "${complaints} + 1")
  endif()
endmacro()

function(run variable)
  execute_process(COMMAND ${ARGN} WORKING_DIRECTORY "${FOLDER}" OUTPUT_VARIABLE out ERROR_VARIABLE err RESULT_VARIABLE status)
  if(NOT status EQUAL 0)
    message(FATAL_ERROR "${ARGN} ended with ${status}\n${err}")
  endif()
  set(${variable} "${out}${err}" PARENT_SCOPE)
endfunction()

run(text "${SUNDER}" new net.toml)

run(text "${SUNDER}" check net.toml)
expect("colour in a pipe" "${text}" FALSE "${escape}")
expect("progress in a pipe" "${text}" FALSE "checking:")

# script makes a terminal; its -e hands on the exit status of the command. A bare chroot has no device to make
# one of: what a pipe sees has been tested by then, the rest is told to be left out.
execute_process(COMMAND script -q -e -c true /dev/null RESULT_VARIABLE no_terminal OUTPUT_QUIET ERROR_QUIET)
if(no_terminal)
  if(complaints GREATER 0)
    message(FATAL_ERROR "${complaints} complaints")
  endif()
  message(NOTICE "no pseudo-terminal on this machine: colour and progress there are not tested")
  return()
endif()

run(text script -q -e -c "'${SUNDER}' check net.toml" /dev/null)
expect("colour on a terminal" "${text}" TRUE "${escape}")
expect("progress on a terminal" "${text}" TRUE "checking:")

run(text script -q -e -c "'${SUNDER}' check net.toml --json" /dev/null)
expect("colour in JSON on a terminal" "${text}" FALSE "${escape}")
expect("progress beside JSON" "${text}" FALSE "checking:")

run(text script -q -e -c "'${SUNDER}' check net.toml -o report.txt" /dev/null)
file(READ "${FOLDER}/report.txt" text)
expect("colour in a file" "${text}" FALSE "${escape}")

set(ENV{NO_COLOR} 1)
run(text script -q -e -c "'${SUNDER}' check net.toml" /dev/null)
expect("colour with NO_COLOR" "${text}" FALSE "${escape}")

if(complaints GREATER 0)
  message(FATAL_ERROR "${complaints} complaint(s); files in ${FOLDER}")
endif()
file(REMOVE_RECURSE "${FOLDER}")
