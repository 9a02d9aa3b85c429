// Layout: which columns of the design belong to which term. Known without any row, so that an analysis from a
// published correlation table has one too.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

namespace unply {

enum class TermKind { plain, category, power, product };

struct TermLayout {
  std::string name;                    // as the user reads it: "Zone_1", "Clay", "A*B", "A^2"
  TermKind kind = TermKind::plain;
  std::vector<std::size_t> columns;    // of the design
  std::vector<std::size_t> built_from; // indices of the lower-order terms in the model that this term is built from
  std::string baseline;                // of a category; else empty
};

struct Layout {
  std::string response;                // empty where there is none
  bool intercept = true;
  std::vector<std::string> columns;    // names of the p columns: "Zone_1", "Clay: red", "A*B"
  std::vector<std::size_t> term_of;    // column -> term
  std::vector<TermLayout> terms;
};

}  // namespace unply
