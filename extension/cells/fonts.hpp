// Font and spacing of each style of the report. One place, so that the layout measures what the sheets show.
#pragma once

#include "extension/cells/report_layout.hpp"
#include "extension/cells/text_measure.hpp"

namespace unply::office {

inline constexpr const char* font_name = "Liberation Sans";

constexpr Font font_of(StyleId style) {
  switch (style) {
    case StyleId::title:
      return {17, true};
    case StyleId::section:
      return {13, true};
    case StyleId::block_title:
      return {10.5, true};
    case StyleId::heading:
    case StyleId::inner_heading:
    case StyleId::number_heading:
      return {8, true};
    case StyleId::words:
    case StyleId::inner_words:
    case StyleId::number:
    case StyleId::first_number:
    case StyleId::count:
    case StyleId::whole:
    case StyleId::p_value:
    case StyleId::percent:
    case StyleId::scientific:
      return {9, false};
    case StyleId::right_words:
      return {8, false};  // short words in a narrow column
    case StyleId::note:
      return {8.5, false};
    case StyleId::mark_clear:
    case StyleId::mark_ruled_out:
    case StyleId::mark_undecided:
    case StyleId::mark_not_estimable:
      return {10, true};
    case StyleId::page:
    case StyleId::label:
    case StyleId::value:
    case StyleId::percent_value:
    case StyleId::sentence:
      return {10, false};
  }
  return {};
}

/// Space above and below the words of a cell, and left of them, in 1/100 mm.
inline constexpr int inner_indent = 250;
constexpr int air_of(StyleId style) {
  switch (style) {
    case StyleId::title:
      return 100;
    case StyleId::sentence:
    case StyleId::mark_clear:
    case StyleId::mark_ruled_out:
    case StyleId::mark_undecided:
    case StyleId::mark_not_estimable:
      return 90;
    case StyleId::section:
    case StyleId::block_title:
    case StyleId::label:
    case StyleId::value:
    case StyleId::percent_value:
      return 60;
    default:
      return 35;
  }
}
constexpr int bar_indent = 150;     // between the coloured bar and the verdict
constexpr int heading_indent = 45;  // between the headings of two columns of numbers
constexpr int indent_of(StyleId style) {
  switch (style) {
    case StyleId::inner_heading:
    case StyleId::inner_words:
      return inner_indent;
    case StyleId::number_heading:
      return heading_indent;
    case StyleId::mark_clear:
    case StyleId::mark_ruled_out:
    case StyleId::mark_undecided:
    case StyleId::mark_not_estimable:
      return bar_indent;
    default:
      return 0;
  }
}

}  // namespace unply::office
