// Settings as people write them, in lines of `name | value`, into a model and back.
#pragma once

#include <cstddef>
#include <optional>
#include <string>
#include <vector>

#include "core/design/model.hpp"
#include "core/report/report.hpp"
#include "extension/text/text.hpp"

namespace unply::office {

struct Settings {
  Model model;
  std::optional<bool> headings;     // does the first row hold the names; without it: look
  std::optional<std::string> data;  // range of the data, where it is not given otherwise
  std::optional<BlockId> table;     // which of the tables from correlations
  std::optional<std::vector<double>> means,
      standard_deviations;  // one for each variable of a correlation table
  bool operator==(const Settings&) const = default;
};

/// What can be set where the rows are at hand, and where only their correlations are.
const std::vector<text::SettingId>& settings_for_rows();
const std::vector<text::SettingId>& settings_for_correlations();

/// First cell of a line: the name, in any case; the cells right of it: the value. A list may be written in
/// one cell, parted by semicolons, or in several cells side by side. Lines without a value leave the setting
/// as it comes. Throws Error: settings_shape, unknown_setting (names the nearest of `possible`),
/// doubled_setting, impossible_setting.
Settings read_settings(const text::Cells& lines, const std::vector<text::SettingId>& possible);

/// The lines that read back as these settings, two cells each; what is as it comes is left out.
text::Cells settings_lines(const Settings& settings);

/// Parts a list at semicolons and line breaks, not within single quotes; outer blanks and empty parts are
/// dropped.
std::vector<std::string> split_list(const std::string& text);

/// A number as people write it: "0.9", "0,9", "90 %", " 1e-3 ".
std::optional<double> number_in(const std::string& text);

}  // namespace unply::office
