// Do intervals, verdicts and their reasons keep what they say? Many tables with known effects are drawn,
// analysed, and counted: VIFs from 1 to over 1,000, few and many rows, little and much noise, effects of
// nothing and of all sizes.
//
//   calibration [--tables N] [--seed S]     exit code 0: every claim holds within Monte-Carlo error
//
// A table: predictors of one of two shapes, or independent ones (a common cause; one the sum of the others),
// with a wanted population VIF, each with a mean and a spread of its own; per predictor a smallest effect
// that matters, d, of one unit per standard deviation of the population; true effects of 0, d/2, d, 1.5 d, 3
// d; normal noise such that without collinearity the interval would be from a tenth of d to three times d
// wide on either side.
//
//  1  Intervals cover the true effect in 95 % of all cases.
//
//  2  `clear` is said of an effect that is nil in at most 5 % of cases.
//
//  3  `ruled out` is said of an effect that matters (at least d) in at most 2.5 % of cases.
//
//  4  "Collinearity alone would account for it": the table is drawn again with orthogonal predictors, the
//     rows, spreads, effects and noise level being the same.
//
//  4a The half-width is then the one that the ledger names: mean logarithm of the ratio 0, over all terms.
//
//  4b Where the sentence was said, most such tables reach the target half-width H. Of those said barely,
//     half: the scatter of the new table is as likely above that of the old as below it. Of the others more.
//
//  4c Every one that reaches H is clear or ruled out.
//
//  4d Where collinearity was said not to be enough, most do not reach H.
//
//  5  Joint tests of groups have p < 5 % in 5 % of the cases in which no member has an effect. Groups are
//     chosen from the predictors alone, so choosing does not favour small p.
//
// A claim fails when the count is more than four Monte-Carlo standard errors on the wrong side; a table
// counts as one case, however many terms it has.
#include <Eigen/Dense>
#include <algorithm>
#include <cmath>
#include <cstdio>
#include <cstdlib>
#include <string>
#include <vector>

#include "core/base/random.hpp"
#include "core/diagnose/collinearity.hpp"
#include "core/diagnose/ledger.hpp"
#include "core/diagnose/verdict.hpp"
#include "core/fit/inference.hpp"
#include "tests/support/made_tables.hpp"

using namespace unply;
using namespace unply::test;
using Eigen::Index;
using Eigen::MatrixXd;
using Eigen::VectorXd;

namespace {

constexpr double level = 0.95;

/// A mean over cases that come in tables: ratio of sums, its standard error from table to table.
class Mean {
 public:
  void add(double value) {
    sum_now_ += value;
    count_now_ += 1;
  }
  void end_of_table() {
    sum_ += sum_now_;
    count_ += count_now_;
    sum_squares_ += sum_now_ * sum_now_;
    products_ += sum_now_ * count_now_;
    count_squares_ += count_now_ * count_now_;
    sum_now_ = count_now_ = 0;
  }
  double count() const { return count_; }
  double value() const { return sum_ / count_; }
  double standard_error() const {
    const double mean = value();
    return std::sqrt(std::max(0.0, sum_squares_ - 2 * mean * products_ + mean * mean * count_squares_)) /
           count_;
  }
  /// For a share expected at `expected`: at least the error that it would have there, where few cases show
  /// none.
  double error_at(double expected) const {
    return std::max(standard_error(), std::sqrt(expected * (1 - expected) / count_));
  }

 private:
  double sum_now_ = 0, count_now_ = 0;
  double sum_ = 0, count_ = 0, sum_squares_ = 0, products_ = 0, count_squares_ = 0;
};

const std::vector<double> band_ends = {2, 5, 10, 30, 100, 300, 1e300};
const std::vector<std::string> band_names = {"VIF 1 to 2",    "VIF 2 to 5",     "VIF 5 to 10", "VIF 10 to 30",
                                             "VIF 30 to 100", "VIF 100 to 300", "VIF over 300"};

std::size_t band_of(double vif) {
  std::size_t band = 0;
  while (vif >= band_ends[band]) ++band;
  return band;
}

struct Banded {
  std::vector<Mean> bands = std::vector<Mean>(band_ends.size());
  Mean all;
  void add(double vif, double value) {
    bands[band_of(vif)].add(value);
    all.add(value);
  }
  void end_of_table() {
    for (Mean& band : bands) band.end_of_table();
    all.end_of_table();
  }
};

template <class Item>
Item pick(Random& random, const std::vector<Item>& items) {
  return items[random.below(items.size())];
}

/// Correlation of equally correlated columns that gives each of them this VIF.
double equal_correlation(double vif, Index columns) {
  const double q = static_cast<double>(columns);
  double low = 0, high = 1;
  for (int k = 0; k < 200; ++k) {
    const double r = (low + high) / 2;
    ((1 + (q - 2) * r) / ((1 - r) * (1 + (q - 1) * r)) < vif ? low : high) = r;
  }
  return low;
}

/// Predictors with population standard deviation 1 and the given population VIF (of the tied ones).
MatrixXd draw_predictors(Random& random, Index n, Index p, Index tied, double vif, bool as_sum) {
  MatrixXd x = random_matrix(random, n, p);
  if (tied < 2 || vif <= 1) return x;
  if (as_sum) {  // the last tied one is the sum of the others and something of its own: 1 - R^2 = 1 / vif
    const double own = 1 / std::sqrt(vif);
    const VectorXd sum = x.leftCols(tied - 1).rowwise().sum() / std::sqrt(static_cast<double>(tied - 1));
    x.col(tied - 1) = std::sqrt(1 - own * own) * sum + own * x.col(tied - 1);
    return x;
  }
  const double r = equal_correlation(vif, tied);
  const VectorXd cause = random_matrix(random, n, 1);
  for (Index j = 0; j < tied; ++j) x.col(j) = std::sqrt(r) * cause + std::sqrt(1 - r) * x.col(j);
  return x;
}

/// Orthogonal columns with the means and standard deviations of the fit's.
MatrixXd untied(Random& random, const LeastSquaresFit& fit) {
  const Index n = static_cast<Index>(fit.rows), p = static_cast<Index>(fit.columns);
  const MatrixXd draws = with_ones(random_matrix(random, n, p));
  const MatrixXd q = Eigen::HouseholderQR<MatrixXd>(draws).householderQ() * MatrixXd::Identity(n, p + 1);
  MatrixXd x(n, p);
  for (Index j = 0; j < p; ++j) {
    x.col(j) = fit.mean[j] + fit.sd[j] * std::sqrt(static_cast<double>(n - 1)) * q.col(j + 1).array();
  }
  return x;
}

struct Counts {
  Banded coverage, clear_on_nothing, ruled_out_on_effect, log_ratio, reach_when_enough, reach_when_not,
      decided;
  Mean reach_when_barely, joint_moderate, joint_strong;
  std::vector<double> verdicts = std::vector<double>(4);

  void end_of_table() {
    for (Banded* banded : {&coverage, &clear_on_nothing, &ruled_out_on_effect, &log_ratio, &reach_when_enough,
                           &reach_when_not, &decided}) {
      banded->end_of_table();
    }
    for (Mean* mean : {&reach_when_barely, &joint_moderate, &joint_strong}) mean->end_of_table();
  }
};

void analyse_one_table(Random& random, Counts& counts) {
  const Index p = 3 + static_cast<Index>(random.below(4));
  const Index n = std::max<Index>(p + 3, pick<Index>(random, {10, 20, 50, 150, 400}));
  const Index tied =
      random.below(8) == 0 ? 0 : 2 + static_cast<Index>(random.below(static_cast<std::uint64_t>(p - 1)));
  const double vif = pick<double>(random, {1, 3, 8, 25, 80, 250, 1000, 2000});
  MatrixXd x = draw_predictors(random, n, p, tied, vif, random.below(2) == 0);

  const double noise =
      std::exp(std::log(0.1) + random.uniform() * std::log(30.0)) * std::sqrt(static_cast<double>(n)) / 2;
  const bool nothing_tied_matters = random.below(2) == 0;
  Model model;
  model.level = level;
  const Layout layout = plain_layout(static_cast<std::size_t>(p));
  VectorXd effects(p), smallest(p);
  for (Index j = 0; j < p; ++j) {
    const double spread = std::exp(2 * random.normal()), mean = 3 * random.normal();
    x.col(j) = spread * (x.col(j).array() + mean);
    smallest[j] = 1 / spread;
    const double multiple = pick<double>(random, {0, 0, 0.5, 1, 1.5, 3}) * (random.below(2) == 0 ? 1 : -1);
    effects[j] = nothing_tied_matters && j < tied ? 0 : multiple * smallest[j];
    model.smallest_effects[layout.columns[static_cast<std::size_t>(j)]] = smallest[j];
  }
  const VectorXd y = 5 + (x * effects).array() + noise * random_matrix(random, n, 1).array();

  const LeastSquaresFit fit = fit_of(x, y);
  const auto tests = coefficient_tests(fit, fit.standard_errors, level);
  const auto ledger = precision_ledger(fit, layout, model);
  const auto groups = collinear_groups(fit, layout, level);
  const auto said = verdicts(tests, ledger, groups, layout, model);

  const MatrixXd freed = untied(random, fit);
  const VectorXd freed_y = 5 + (freed * effects).array() + noise * random_matrix(random, n, 1).array();
  const LeastSquaresFit freed_fit = fit_of(freed, freed_y);
  const auto freed_tests = coefficient_tests(freed_fit, freed_fit.standard_errors, level);
  const auto freed_ledger = precision_ledger(freed_fit, layout, model);
  const auto freed_said = verdicts(freed_tests, freed_ledger, {}, layout, model);

  for (Index j = 0; j < p; ++j) {
    const std::size_t k = static_cast<std::size_t>(j);
    const LedgerRow& row = ledger[k];
    const Interval& interval = tests[k].interval;
    counts.verdicts[static_cast<std::size_t>(said[k].kind)] += 1;
    counts.coverage.add(row.vif, interval.lower <= effects[j] && effects[j] <= interval.upper);
    if (effects[j] == 0) counts.clear_on_nothing.add(row.vif, said[k].kind == VerdictKind::clear);
    if (std::abs(effects[j]) >= smallest[j]) {
      counts.ruled_out_on_effect.add(row.vif, said[k].kind == VerdictKind::ruled_out);
    }
    const double reach = freed_tests[k].interval.half_width();
    counts.log_ratio.add(row.vif, std::log(reach * row.widening / row.half_width));
    const bool reaches = freed_ledger[k].reached;
    if (reaches) counts.decided.add(row.vif, freed_said[k].kind != VerdictKind::undecided);
    if (said[k].collinearity == CollinearityRole::would_account) {
      counts.reach_when_enough.add(row.vif, reaches);
      if (row.half_width / row.widening > 0.95 * row.target) counts.reach_when_barely.add(reaches);
    } else if (said[k].kind == VerdictKind::undecided) {
      counts.reach_when_not.add(row.vif, reaches);
    }
  }
  for (const CollinearGroup& group : groups) {
    const bool nothing = std::all_of(group.columns.begin(), group.columns.end(), [&](std::size_t column) {
      return effects[static_cast<Index>(column)] == 0;
    });
    if (nothing) (group.strong ? counts.joint_strong : counts.joint_moderate).add(group.p < 1 - level);
  }
  counts.end_of_table();
}

enum class Side { equal, at_most, at_least };

class Table {
 public:
  void heading(const std::string& claim) { std::printf("\n%s\n", claim.c_str()); }

  /// One line; fails where the mean is more than four standard errors on the wrong side.
  void line(const std::string& name, const Mean& mean, double expected, Side side, bool share = true) {
    if (mean.count() < 20) {
      std::printf("  %-16s %9.0f      too few cases\n", name.c_str(), mean.count());
      return;
    }
    const double error = share ? mean.error_at(expected) : mean.standard_error();
    const double off = mean.value() - expected;
    const bool fails = (side == Side::equal && std::abs(off) > 4 * error) ||
                       (side == Side::at_most && off > 4 * error) ||
                       (side == Side::at_least && off < -4 * error);
    const char* sign = side == Side::equal ? "=" : side == Side::at_most ? "<=" : ">=";
    std::printf("  %-16s %9.0f  %9.4f  +- %.4f   %2s %.4f   %s\n", name.c_str(), mean.count(), mean.value(),
                error, sign, expected, fails ? "FAILS" : "holds");
    failed_ = failed_ || fails;
  }
  void lines(const Banded& banded, double expected, Side side, bool share = true) {
    for (std::size_t band = 0; band < banded.bands.size(); ++band) {
      line(band_names[band], banded.bands[band], expected, side, share);
    }
    line("all", banded.all, expected, side, share);
  }
  bool failed() const { return failed_; }

 private:
  bool failed_ = false;
};

}  // namespace

int main(int argc, char** argv) {
  long tables = 1000;
  std::uint64_t seed = 20260207;
  for (int i = 1; i + 1 < argc; i += 2) {
    const std::string option = argv[i];
    if (option == "--tables")
      tables = std::atol(argv[i + 1]);
    else if (option == "--seed")
      seed = std::strtoull(argv[i + 1], nullptr, 10);
    else
      return std::printf("calibration [--tables N] [--seed S]\n"), 2;
  }
  Random random(seed);
  Counts counts;
  for (long table = 0; table < tables; ++table) analyse_one_table(random, counts);

  std::printf("%ld tables, seed %llu\n", tables, static_cast<unsigned long long>(seed));
  std::printf("verdicts: %.0f clear, %.0f ruled out, %.0f undecided\n", counts.verdicts[0],
              counts.verdicts[1], counts.verdicts[2]);
  std::printf("  %-16s %9s  %9s     %6s      %s\n", "", "cases", "found", "error", "claimed");
  Table table;
  table.heading("1 intervals cover the true effect");
  table.lines(counts.coverage, 0.95, Side::equal);
  table.heading("2 clear, although the effect is nil");
  table.lines(counts.clear_on_nothing, 0.05, Side::at_most);
  table.heading("3 ruled out, although the effect matters");
  table.lines(counts.ruled_out_on_effect, 0.025, Side::at_most);
  table.heading("4a without the collinearity: log of half-width found / half-width named");
  table.lines(counts.log_ratio, 0, Side::equal, false);
  table.heading("4b collinearity said to account for it: reaches the target without it");
  table.lines(counts.reach_when_enough, 0.5, Side::at_least);
  table.line("said barely", counts.reach_when_barely, 0.5, Side::at_least);
  table.heading("4c reaches the target: is clear or ruled out");
  table.lines(counts.decided, 1, Side::at_least);
  table.heading("4d collinearity said not to be enough: reaches the target without it");
  table.lines(counts.reach_when_not, 0.5, Side::at_most);
  table.heading("5 joint test of a group without any effect: p < 5 %");
  table.line("moderate groups", counts.joint_moderate, 0.05, Side::equal);
  table.line("strong groups", counts.joint_strong, 0.05, Side::equal);
  std::printf("\n%s\n", table.failed() ? "A claim does not hold." : "Every claim holds.");
  return table.failed() ? 1 : 0;
}
