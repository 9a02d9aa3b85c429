#include "tests/support/reference.hpp"

#include <algorithm>
#include <cmath>
#include <fstream>
#include <sstream>
#include <stdexcept>

namespace unply::test {
namespace {

std::ifstream open(const std::string& file) {
  std::ifstream in(reference_path(file));
  if (!in) throw std::runtime_error("no such file in tests/reference: " + file);
  return in;
}

std::vector<std::string> split(const std::string& line, char separator) {
  std::vector<std::string> parts;
  std::stringstream stream(line);
  for (std::string part; std::getline(stream, part, separator);) parts.push_back(part);
  return parts;
}

}  // namespace

std::string reference_path(const std::string& file) { return std::string(UNPLY_REFERENCE_FOLDER) + "/" + file; }

Figures read_figures(const std::string& name) {
  std::ifstream in = open(name + ".txt");
  Figures figures;
  for (std::string line; std::getline(in, line);) {
    if (line.empty() || line[0] == '#') continue;
    const std::size_t last = line.rfind(" | ");
    if (last == std::string::npos) throw std::runtime_error(name + ": not a figure: " + line);
    figures[line.substr(0, last)] = line.substr(last + 3);
  }
  return figures;
}

std::vector<std::string> Csv::column(const std::string& heading) const {
  const auto at = std::find(headings.begin(), headings.end(), heading);
  if (at == headings.end()) throw std::runtime_error("no such column: " + heading);
  std::vector<std::string> values;
  for (const auto& row : rows) values.push_back(row.at(static_cast<std::size_t>(at - headings.begin())));
  return values;
}

Eigen::VectorXd Csv::numbers(const std::string& heading) const {
  const std::vector<std::string> values = column(heading);
  Eigen::VectorXd result(static_cast<Eigen::Index>(values.size()));
  for (std::size_t i = 0; i < values.size(); ++i) result[static_cast<Eigen::Index>(i)] = std::stod(values[i]);
  return result;
}

Csv read_csv(const std::string& name) {
  std::ifstream in = open(name + ".csv");
  Csv csv;
  for (std::string line; std::getline(in, line);) {
    if (!line.empty() && line.back() == '\r') line.pop_back();
    if (line.empty()) continue;
    if (csv.headings.empty()) csv.headings = split(line, ',');
    else csv.rows.push_back(split(line, ','));
  }
  return csv;
}

double matching_digits(double value, double certified) {
  if (std::isnan(value) || std::isnan(certified)) return 0;
  if (value == certified) return 16;
  const double error = certified == 0 ? std::abs(value) : std::abs((value - certified) / certified);
  return std::clamp(-std::log10(error), 0.0, 16.0);
}

bool agrees_as_printed(double value, const std::string& printed, double units) {
  const std::size_t exponent_at = printed.find_first_of("eE");
  const std::string mantissa = printed.substr(0, exponent_at);
  const int exponent = exponent_at == std::string::npos ? 0 : std::stoi(printed.substr(exponent_at + 1));
  const std::size_t point = mantissa.find('.');
  const int decimals = point == std::string::npos ? 0 : static_cast<int>(mantissa.size() - point - 1);
  const double last_place = std::pow(10.0, exponent - decimals);
  return std::abs(value - std::stod(printed)) <= units * last_place;
}

}  // namespace unply::test
