// Terms as spreadsheet arithmetic on headings, and how terms are built from one another.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "core/data/table.hpp"
#include "core/design/model.hpp"

namespace unply {

/// A term with the table columns of its factors, in the same order.
struct ResolvedTerm {
  Term term;
  std::vector<std::size_t> columns;
};

/// As parse_term in core/design/design.hpp, with the columns found.
ResolvedTerm resolve_term(const std::string& text, const Table& table);

/// The term of one column as it stands.
ResolvedTerm plain_term(std::size_t column, const Table& table);

/// Same factors, in whatever order they were written.
bool same_term(const ResolvedTerm& a, const ResolvedTerm& b);

/// True where `part` divides `whole` and is smaller: A of A*B, A^2 of A^2*B.
bool is_lower_order(const ResolvedTerm& part, const ResolvedTerm& whole);

/// Names of the lower-order terms of `term` that are not in `model`, lowest order first; at most
/// tolerance::largest_degree of them.
std::vector<std::string> missing_lower_terms(const ResolvedTerm& term, const std::vector<ResolvedTerm>& model,
                                             const Table& table);

}  // namespace unply
