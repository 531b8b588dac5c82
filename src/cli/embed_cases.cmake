# Writes OUTPUT, a C++ source with the text of every case in FILES (separated by |) under ROOT.
cmake_minimum_required(VERSION 3.25)
set(source "#include \"chainmark/cli/embedded.hpp\"

namespace chainmark::cli {

const std::vector<EmbeddedCase>& embedded_cases() {
    static const std::vector<EmbeddedCase> all = {
")
string(REPLACE "|" ";" files "${FILES}")
foreach(file IN LISTS files)
    file(READ ${file} text)
    get_filename_component(name ${file} NAME_WLE)
    if(name IN_LIST names)
        message(FATAL_ERROR "two embedded cases are called ${name}")
    endif()
    list(APPEND names ${name})
    get_filename_component(folder ${file} DIRECTORY)
    file(RELATIVE_PATH folder ${ROOT} ${folder})
    string(APPEND source "        {\"${name}\", \"${folder}\", R\"chainmark_case(${text})chainmark_case\"},\n")
endforeach()
string(APPEND source "    };
    return all;
}

}  // namespace chainmark::cli
")
file(WRITE ${OUTPUT} "${source}")
