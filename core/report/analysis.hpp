// An analysis: one table, one model, and every result that is asked of it, each computed once, when first asked.
#pragma once

#include <cstdint>
#include <memory>
#include <string>
#include <vector>

#include "core/base/error.hpp"
#include "core/data/table.hpp"
#include "core/design/design.hpp"
#include "core/design/model.hpp"
#include "core/diagnose/collinearity.hpp"
#include "core/diagnose/dependency.hpp"
#include "core/diagnose/ledger.hpp"
#include "core/diagnose/recording_precision.hpp"
#include "core/diagnose/residual_checks.hpp"
#include "core/diagnose/verdict.hpp"
#include "core/fit/from_correlations.hpp"
#include "core/fit/inference.hpp"
#include "core/fit/least_squares.hpp"
#include "core/report/report.hpp"

namespace unply {

class Analysis {
 public:
  /// Nothing is computed yet. Every getter may throw Error.
  Analysis(std::shared_ptr<const Table> table, Model model);
  /// From a published correlation table: getters that need rows throw Error needs_rows.
  Analysis(const CorrelationTable& table, Model model);
  ~Analysis();

  const Model& model() const;
  bool has_rows() const;                                  // false for an analysis from correlations
  const Table& table() const;
  const Design& design() const;
  const Layout& layout() const;
  const LeastSquaresFit& fit() const;
  const Eigen::VectorXd& standard_errors() const;         // of the kind that the model asks for
  const std::vector<CoefficientTest>& tests() const;
  CoefficientTest intercept() const;
  const std::vector<TermInflation>& inflation() const;
  const ConditionTable& condition() const;                // as the model asks: centred or not
  const std::vector<CollinearGroup>& groups() const;
  const std::vector<DependencyEquation>& equations() const;
  const std::vector<LedgerRow>& ledger() const;
  const std::vector<TermVerdict>& verdicts() const;
  const ResidualChecks& checks() const;                   // one more pass over the rows
  const RecordingPrecision& recording() const;
  /// The same model with centring switched; null where the model has no product and no power.
  const Analysis* with_other_centring() const;

 private:
  struct State;
  std::unique_ptr<State> state_;
};

/// The table behind a sheet function: inflation, condition, dependencies, estimates, fit_quality, ledger, groups,
/// rows_needed. `extra` notes (e.g. of the reader of cells) are put first.
TableBlock table_block(BlockId id, const Analysis& analysis, std::vector<Phrase> extra = {});

/// Predictions for new rows of the same columns, with intervals for a single new observation at the model's level.
TableBlock predictions_block(const Analysis& analysis, std::shared_ptr<const Table> new_rows);

/// What only the caller knows about where the data came from.
struct ReportContext {
  std::string data_range;
  std::string file;
  std::string version;
  std::string date;
  std::vector<std::string> settings;  // `name = value`, as the user gave them
  std::vector<Phrase> notes;
};

/// The whole report, section by section.
Report full_report(const Analysis& analysis, const ReportContext& context);

/// 64-bit fingerprint of the columns of a table: names, numbers, texts (FNV-1a over the bytes of the values).
std::uint64_t fingerprint(const Table& table);

}  // namespace unply
