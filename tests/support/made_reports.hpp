// Reports made up for tests: every kind of block, in shapes that an analysis seldom has.
#pragma once

#include <string>
#include <vector>

#include "core/report/report.hpp"

namespace unply::test {

/// Names known: `kiln`, `two`, `forty`, `long names`, `category`, `formulas`, `huge`, `nothing`.
std::vector<std::string> shapes();
Report made_report(const std::string& shape);

}  // namespace unply::test
