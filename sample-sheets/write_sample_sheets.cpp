// Writes the sample workbooks: write_sample_sheets FOLDER
#include <exception>
#include <fstream>
#include <iostream>
#include <stdexcept>
#include <string>

#include "sample-sheets/sample_book.hpp"

int main(int count, char** arguments) {
  if (count != 2) {
    std::cerr << "usage: write_sample_sheets FOLDER\n";
    return 2;
  }
  try {
    const std::string folder = arguments[1];
    const auto write = [&](const char* name, const std::string& text) {
      std::ofstream file(folder + "/" + name, std::ios::binary);
      file << text;
      if (!file.flush()) throw std::runtime_error("cannot write " + folder + "/" + name);
    };
    write("kiln.fods", unply::samples::kiln_workbook());
    write("service_desk.fods", unply::samples::service_desk_workbook());
    write("survey.fods", unply::samples::survey_workbook());
  } catch (const std::exception& error) {
    std::cerr << error.what() << "\n";
    return 1;
  }
  return 0;
}
