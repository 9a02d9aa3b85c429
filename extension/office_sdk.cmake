# Finds what is needed to build against the office: the SDK's tools, headers, libraries, and the office's types.
# Sets OFFICE_SDK_FOUND; gives the targets office_sdk (headers, libraries) and the function add_office_types().
set(office_places ENV OO_SDK_HOME /usr/lib/libreoffice /usr/lib64/libreoffice /opt/libreoffice)
find_program(OFFICE_UNOIDL_WRITE unoidl-write PATHS ${office_places} PATH_SUFFIXES bin sdk/bin)
find_program(OFFICE_CPPUMAKER cppumaker PATHS ${office_places} PATH_SUFFIXES bin sdk/bin)
find_program(OFFICE_UNOPKG unopkg PATHS ${office_places} PATH_SUFFIXES program)
find_program(OFFICE_SOFFICE soffice PATHS ${office_places} PATH_SUFFIXES program)
find_file(OFFICE_TYPES types.rdb PATHS ${office_places} PATH_SUFFIXES program ../program)
find_file(OFFICE_API_TYPES offapi.rdb PATHS ${office_places} PATH_SUFFIXES program/types ../program/types)
find_path(OFFICE_INCLUDES cppuhelper/implbase2.hxx PATHS ${office_places}
          PATH_SUFFIXES libreoffice include sdk/include)
set(office_libraries)
foreach(name uno_cppuhelpergcc3 uno_cppu uno_salhelpergcc3 uno_sal)
  find_library(OFFICE_${name} ${name} PATHS ${office_places} PATH_SUFFIXES lib sdk/lib)
  list(APPEND office_libraries ${OFFICE_${name}})
endforeach()

set(OFFICE_SDK_FOUND TRUE)
foreach(part OFFICE_UNOIDL_WRITE OFFICE_CPPUMAKER OFFICE_TYPES OFFICE_API_TYPES OFFICE_INCLUDES
             OFFICE_uno_cppuhelpergcc3 OFFICE_uno_cppu OFFICE_uno_salhelpergcc3 OFFICE_uno_sal)
  if(NOT ${part})
    set(OFFICE_SDK_FOUND FALSE)
    message(STATUS "The office's SDK is incomplete: ${part} was not found")
  endif()
endforeach()

# add_office_types(name folder idl...): compiles the IDL files in the folder (each in the folder of its module, named
# like its type) into ${name}.rdb and C++ headers. The target `name` carries the headers; its property TYPES_FILE is
# the .rdb.
function(add_office_types name folder)
  cmake_path(ABSOLUTE_PATH folder BASE_DIRECTORY ${CMAKE_CURRENT_SOURCE_DIR} NORMALIZE OUTPUT_VARIABLE root)
  set(types ${CMAKE_CURRENT_BINARY_DIR}/${name}.rdb)
  set(headers ${CMAKE_CURRENT_BINARY_DIR}/${name}_headers)
  set(stamp ${CMAKE_CURRENT_BINARY_DIR}/${name}.stamp)
  list(TRANSFORM ARGN PREPEND ${root}/ OUTPUT_VARIABLE sources)
  add_custom_command(OUTPUT ${types} ${stamp}
    COMMAND ${OFFICE_UNOIDL_WRITE} ${OFFICE_TYPES} ${OFFICE_API_TYPES} ${root} ${types}
    COMMAND ${CMAKE_COMMAND} -E rm -rf ${headers}
    COMMAND ${OFFICE_CPPUMAKER} -Gc -O ${headers} ${OFFICE_TYPES} ${OFFICE_API_TYPES} ${types}
    COMMAND ${CMAKE_COMMAND} -E touch ${stamp}
    DEPENDS ${sources} VERBATIM COMMENT "Compiling the interfaces of ${name}")
  add_custom_target(${name}_generated DEPENDS ${types} ${stamp})
  add_library(${name} INTERFACE)
  add_dependencies(${name} ${name}_generated)
  target_include_directories(${name} SYSTEM INTERFACE ${headers} ${OFFICE_INCLUDES})
  target_compile_definitions(${name} INTERFACE LINUX)
  target_link_libraries(${name} INTERFACE ${office_libraries})
  set_target_properties(${name} PROPERTIES TYPES_FILE ${types})
endfunction()

# add_office_package(target file library (source place)...): zips the files, each at its place, and the library, which
# keeps its name, into one package that the office installs.
function(add_office_package name file library)
  set(folder ${CMAKE_CURRENT_BINARY_DIR}/${name}_content)
  set(copies)
  set(sources)
  while(ARGN)
    list(POP_FRONT ARGN source place)
    cmake_path(GET place PARENT_PATH place_folder)
    list(APPEND copies COMMAND ${CMAKE_COMMAND} -E make_directory ${folder}/${place_folder}
                       COMMAND ${CMAKE_COMMAND} -E copy ${source} ${folder}/${place})
    list(APPEND sources ${source})
  endwhile()
  add_custom_command(OUTPUT ${file}
    COMMAND ${CMAKE_COMMAND} -E rm -rf ${folder} ${file}
    ${copies}
    COMMAND ${CMAKE_COMMAND} -E copy $<TARGET_FILE:${library}> ${folder}
    COMMAND ${CMAKE_COMMAND} -E chdir ${folder} ${CMAKE_COMMAND} -E tar cf ${file} --format=zip .
    DEPENDS ${sources} ${library} VERBATIM COMMENT "Packing ${file}")
  add_custom_target(${name} ALL DEPENDS ${file})
endfunction()
