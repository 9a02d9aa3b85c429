// Parts of tables that the findings and the write-up share.
#pragma once

#include <string>
#include <vector>

#include "core/report/analysis.hpp"

namespace unply {

/// The short wording of a verdict.
PhraseId verdict_word(const TermVerdict& verdict);

/// The table with the notes that belong to it alone.
TableBlock bare_table(BlockId id, const Analysis& analysis);

/// Notes that hold for the whole analysis: rows left out, coding, centring, what cannot be estimated.
std::vector<Phrase> shared_notes(const Analysis& analysis);

/// Names of columns of the design.
std::vector<std::string> names_of(const std::vector<std::size_t>& columns, const Layout& layout);

}  // namespace unply
