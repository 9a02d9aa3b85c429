#include "core/report/report.hpp"

namespace unply {

NumberFormat number_format(HeadingId heading) {
  switch (heading) {
    case HeadingId::df:
    case HeadingId::df_numerator:
    case HeadingId::df_denominator:
    case HeadingId::residual_df:
    case HeadingId::rows:
    case HeadingId::rows_now:
    case HeadingId::rows_used:
    case HeadingId::rows_needed:
    case HeadingId::rows_left_out:
    case HeadingId::coefficients:
    case HeadingId::row:
    case HeadingId::group:
    case HeadingId::seed:
      return NumberFormat::count;
    case HeadingId::p:
    case HeadingId::f_p:
      return NumberFormat::p_value;
    case HeadingId::vif:
    case HeadingId::vif_needed:
    case HeadingId::vif_centred:
    case HeadingId::vif_as_given:
    case HeadingId::generalised_vif:
    case HeadingId::per_df_root:
    case HeadingId::widening:
    case HeadingId::condition_index:
    case HeadingId::condition_number:
    case HeadingId::condition_with:
    case HeadingId::condition_without:
    case HeadingId::movement_share:
      return NumberFormat::ratio;
    case HeadingId::shared_variation:
    case HeadingId::share:
    case HeadingId::r_squared:
    case HeadingId::adjusted_r_squared:
    case HeadingId::leverage:
    case HeadingId::level:
    case HeadingId::intercept:  // of the condition table: a share of variance, like the columns beside it
      return NumberFormat::share;
    case HeadingId::t:
    case HeadingId::f:
    case HeadingId::f_test:
    case HeadingId::statistic:
    case HeadingId::studentised:
    case HeadingId::cooks_distance:
    case HeadingId::trusted_digits:
      return NumberFormat::statistic;
    case HeadingId::name:
    case HeadingId::item:
    case HeadingId::value:
    case HeadingId::term:
    case HeadingId::estimate:
    case HeadingId::standard_error:
    case HeadingId::lower:
    case HeadingId::upper:
    case HeadingId::standardised:
    case HeadingId::verdict:
    case HeadingId::scatter:
    case HeadingId::rows_factor:
    case HeadingId::spread:
    case HeadingId::error_without_collinearity:
    case HeadingId::half_width:
    case HeadingId::target:
    case HeadingId::spread_needed:
    case HeadingId::scatter_needed:
    case HeadingId::kind:
    case HeadingId::equation:
    case HeadingId::leave_out:
    case HeadingId::members:
    case HeadingId::near_dependency:
    case HeadingId::combination:
    case HeadingId::weights:
    case HeadingId::prediction:
    case HeadingId::interval_lower:
    case HeadingId::interval_upper:
    case HeadingId::outside:
    case HeadingId::address:
    case HeadingId::residual:
    case HeadingId::unit_recorded:
    case HeadingId::movement:
    case HeadingId::check:
    case HeadingId::what_it_means:
    case HeadingId::residual_sd:
    case HeadingId::prediction_error:
    case HeadingId::data_range:
    case HeadingId::response:
    case HeadingId::purpose:
    case HeadingId::standard_error_kind:
    case HeadingId::fingerprint:
    case HeadingId::version:
    case HeadingId::date:
    case HeadingId::categories:
    case HeadingId::settings:
    case HeadingId::terms:
    case HeadingId::smallest_effect:
    case HeadingId::effect_of_one_sd:
      return NumberFormat::general;
  }
  return NumberFormat::general;
}

}  // namespace unply
