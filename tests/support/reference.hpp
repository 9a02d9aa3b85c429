// Reads the published check values under tests/reference, and counts digits of agreement.
#pragma once

#include <Eigen/Core>
#include <map>
#include <string>
#include <vector>

namespace unply::test {

/// Figures of NAME.txt: key = path of the figure joined by " | ", e.g. "published | estimates | x1"; value as printed.
using Figures = std::map<std::string, std::string>;
Figures read_figures(const std::string& name);

/// NAME.csv with its heading row; numbers as text, so that a test may read them in any precision.
struct Csv {
  std::vector<std::string> headings;
  std::vector<std::vector<std::string>> rows;
  std::vector<std::string> column(const std::string& heading) const;
  Eigen::VectorXd numbers(const std::string& heading) const;
};
Csv read_csv(const std::string& name);

/// Path of a file in tests/reference.
std::string reference_path(const std::string& file);

/// Log relative error: -log10(|value - certified| / |certified|), capped at 16; where certified is 0, of the absolute
/// error. NaN gives 0.
double matching_digits(double value, double certified);

/// True where `value`, rounded to as many decimal places (or significant digits with an exponent) as `printed` shows,
/// is `printed`, give or take one unit of the last printed place times `units`.
bool agrees_as_printed(double value, const std::string& printed, double units = 0.5000001);

}  // namespace unply::test
