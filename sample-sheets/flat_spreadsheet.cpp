#include "sample-sheets/flat_spreadsheet.hpp"

#include <charconv>
#include <stdexcept>

namespace unply::samples {
namespace {

std::string escaped(const std::string& text) {
  std::string result;
  for (const char c : text) {
    switch (c) {
      case '&':
        result += "&amp;";
        break;
      case '<':
        result += "&lt;";
        break;
      case '>':
        result += "&gt;";
        break;
      case '"':
        result += "&quot;";
        break;
      default:
        result += c;
    }
  }
  return result;
}

const char* style_name(Style style) {
  switch (style) {
    case Style::plain:
      return "Default";
    case Style::title:
      return "Sheet_title";
    case Style::section:
      return "Section";
    case Style::text:
      return "Sentence";
    case Style::heading:
      return "Column_heading";
    case Style::heading_right:
      return "Column_heading_right";
    case Style::whole:
      return "Whole";
    case Style::one_decimal:
      return "One_decimal";
    case Style::two_decimals:
      return "Two_decimals";
    case Style::three_decimals:
      return "Three_decimals";
    case Style::four_decimals:
      return "Four_decimals";
    case Style::p_value:
      return "P_value";
    case Style::all_digits:
      return "All_digits";
    case Style::date:
      return "Day";
    case Style::words:
      return "Words";
    case Style::note:
      return "Note_below";
    case Style::formula_shown:
      return "Formula_shown";
    case Style::judged:
      return "judged";
    case Style::result:
      return "result";
  }
  throw std::logic_error("a style without a name");
}

// Colours: blue #0072b2, orange #d55e00 and their tints, after Okabe & Ito's palette, which colour-blind
// readers can tell apart; the word TRUE or FALSE carries the same message.
const char* const styles = R"(  <office:styles>
    <style:default-style style:family="table-cell">
      <style:text-properties style:font-name="Liberation Sans" fo:font-size="10pt" fo:language="en" fo:country="GB"/>
    </style:default-style>
    <number:number-style style:name="F0"><number:number number:decimal-places="0" number:min-integer-digits="1"/></number:number-style>
    <number:number-style style:name="F1"><number:number number:decimal-places="1" number:min-decimal-places="1" number:min-integer-digits="1"/></number:number-style>
    <number:number-style style:name="F2"><number:number number:decimal-places="2" number:min-decimal-places="2" number:min-integer-digits="1"/></number:number-style>
    <number:number-style style:name="F3"><number:number number:decimal-places="3" number:min-decimal-places="3" number:min-integer-digits="1"/></number:number-style>
    <number:number-style style:name="F4"><number:number number:decimal-places="4" number:min-decimal-places="4" number:min-integer-digits="1"/></number:number-style>
    <number:number-style style:name="F15"><number:scientific-number number:decimal-places="14" number:min-decimal-places="14" number:min-integer-digits="1" number:min-exponent-digits="2"/></number:number-style>
    <number:number-style style:name="FPsmall"><number:text>&lt;0.0001</number:text></number:number-style>
    <number:number-style style:name="FP"><number:number number:decimal-places="4" number:min-decimal-places="4" number:min-integer-digits="1"/><style:map style:condition="value()&lt;0.0001" style:apply-style-name="FPsmall"/></number:number-style>
    <number:date-style style:name="FD"><number:year number:style="long"/><number:text>-</number:text><number:month number:style="long"/><number:text>-</number:text><number:day number:style="long"/></number:date-style>
    <number:boolean-style style:name="FB"><number:boolean/></number:boolean-style>
    <style:style style:name="Default" style:family="table-cell"/>
    <style:style style:name="Sheet_title" style:display-name="Sheet title" style:family="table-cell" style:parent-style-name="Default">
      <style:text-properties fo:font-size="15pt" fo:font-weight="bold" fo:color="#1f3b57"/>
    </style:style>
    <style:style style:name="Section" style:family="table-cell" style:parent-style-name="Default">
      <style:text-properties fo:font-size="11pt" fo:font-weight="bold" fo:color="#1f3b57"/>
    </style:style>
    <style:style style:name="Sentence" style:family="table-cell" style:parent-style-name="Default">
      <style:text-properties fo:color="#333333"/>
    </style:style>
    <style:style style:name="Column_heading" style:display-name="Column heading" style:family="table-cell" style:parent-style-name="Default">
      <style:table-cell-properties fo:background-color="#e6edf3" fo:border-bottom="0.75pt solid #1f3b57" style:vertical-align="bottom" fo:wrap-option="wrap" style:text-align-source="fix"/>
      <style:paragraph-properties fo:text-align="start" fo:margin-left="0.15cm"/>
      <style:text-properties fo:font-weight="bold"/>
    </style:style>
    <style:style style:name="Column_heading_right" style:display-name="Column heading right" style:family="table-cell" style:parent-style-name="Column_heading">
      <style:paragraph-properties fo:text-align="end" fo:margin-left="0cm"/>
    </style:style>
    <style:style style:name="Whole" style:family="table-cell" style:parent-style-name="Default" style:data-style-name="F0"><style:table-cell-properties style:text-align-source="fix"/><style:paragraph-properties fo:text-align="end"/></style:style>
    <style:style style:name="One_decimal" style:display-name="One decimal" style:family="table-cell" style:parent-style-name="Default" style:data-style-name="F1"><style:table-cell-properties style:text-align-source="fix"/><style:paragraph-properties fo:text-align="end"/></style:style>
    <style:style style:name="Two_decimals" style:display-name="Two decimals" style:family="table-cell" style:parent-style-name="Default" style:data-style-name="F2"><style:table-cell-properties style:text-align-source="fix"/><style:paragraph-properties fo:text-align="end"/></style:style>
    <style:style style:name="Three_decimals" style:display-name="Three decimals" style:family="table-cell" style:parent-style-name="Default" style:data-style-name="F3"><style:table-cell-properties style:text-align-source="fix"/><style:paragraph-properties fo:text-align="end"/></style:style>
    <style:style style:name="Four_decimals" style:display-name="Four decimals" style:family="table-cell" style:parent-style-name="Default" style:data-style-name="F4"><style:table-cell-properties style:text-align-source="fix"/><style:paragraph-properties fo:text-align="end"/></style:style>
    <style:style style:name="P_value" style:display-name="P value" style:family="table-cell" style:parent-style-name="Default" style:data-style-name="FP"><style:table-cell-properties style:text-align-source="fix"/><style:paragraph-properties fo:text-align="end"/></style:style>
    <style:style style:name="Note_below" style:display-name="Note below" style:family="table-cell" style:parent-style-name="Default">
      <style:text-properties fo:color="#333333" fo:font-size="9pt"/>
    </style:style>
    <style:style style:name="All_digits" style:display-name="All digits" style:family="table-cell" style:parent-style-name="Default" style:data-style-name="F15"><style:table-cell-properties style:text-align-source="fix"/><style:paragraph-properties fo:text-align="end"/></style:style>
    <style:style style:name="Day" style:family="table-cell" style:parent-style-name="Default" style:data-style-name="FD"/>
    <style:style style:name="Words" style:family="table-cell" style:parent-style-name="Default">
      <style:table-cell-properties style:text-align-source="fix"/>
      <style:paragraph-properties fo:text-align="start" fo:margin-left="0.15cm"/>
    </style:style>
    <style:style style:name="Formula_shown" style:display-name="Formula shown" style:family="table-cell" style:parent-style-name="Default">
      <style:text-properties fo:color="#6b7785" fo:font-size="8pt" fo:font-style="italic"/>
    </style:style>
    <style:style style:name="Stands_out" style:display-name="Stands out" style:family="table-cell" style:parent-style-name="Default">
      <style:table-cell-properties fo:background-color="#f6d5bd"/>
      <style:text-properties fo:color="#8a3d00" fo:font-weight="bold"/>
    </style:style>
    <style:style style:name="Judged" style:family="table-cell" style:parent-style-name="Default" style:data-style-name="FB">
      <style:table-cell-properties style:text-align-source="fix"/>
      <style:paragraph-properties fo:text-align="center"/>
      <style:text-properties fo:color="#0b4f7a"/>
    </style:style>
    <style:style style:name="Result_cell" style:display-name="Result cell" style:family="table-cell" style:parent-style-name="Default" style:data-style-name="FB">
      <style:table-cell-properties fo:background-color="#cfe6f5" fo:border="0.75pt solid #0072b2" style:text-align-source="fix"/>
      <style:paragraph-properties fo:text-align="center"/>
      <style:text-properties fo:font-size="12pt" fo:font-weight="bold" fo:color="#0b4f7a"/>
    </style:style>
  </office:styles>
)";

// The office reads conditions from the styles of single cells only.
const char* const conditions =
    R"(    <style:style style:name="judged" style:family="table-cell" style:parent-style-name="Judged">
      <style:map style:condition="cell-content()=0" style:apply-style-name="Stands_out" style:base-cell-address="$Check.$D$1"/>
    </style:style>
    <style:style style:name="result" style:family="table-cell" style:parent-style-name="Result_cell">
      <style:map style:condition="cell-content()=0" style:apply-style-name="Stands_out" style:base-cell-address="$Check.$B$5"/>
    </style:style>
)";

const char* const page = R"(    <style:page-layout style:name="Landscape">
      <style:page-layout-properties fo:page-width="29.7cm" fo:page-height="21cm" style:print-orientation="landscape" fo:margin-top="1.5cm" fo:margin-bottom="1.5cm" fo:margin-left="1.5cm" fo:margin-right="1.5cm" style:scale-to-X="1" style:scale-to-Y="0"/>
      <style:header-style><style:header-footer-properties fo:min-height="0.7cm" fo:margin-bottom="0.3cm"/></style:header-style>
      <style:footer-style><style:header-footer-properties fo:min-height="0.7cm" fo:margin-top="0.3cm"/></style:footer-style>
    </style:page-layout>
  </office:automatic-styles>
  <office:master-styles>
    <style:master-page style:name="Default" style:page-layout-name="Landscape">
      <style:header><text:p><text:sheet-name>-</text:sheet-name></text:p></style:header>
      <style:footer><text:p>Page <text:page-number>1</text:page-number> of <text:page-count>1</text:page-count></text:p></style:footer>
    </style:master-page>
  </office:master-styles>
)";

std::string width_style(double centimetres) {
  std::string name = "w" + shortest(centimetres);
  for (char& c : name) {
    if (c == '.') c = '_';
  }
  return name;
}

constexpr double default_width = 2.3;

}  // namespace

std::string shortest(double value) {
  char buffer[40];
  const auto end = std::to_chars(buffer, buffer + sizeof buffer, value);
  return {buffer, end.ptr};
}

std::string column_letters(std::size_t column) {
  std::string letters;
  for (std::size_t rest = column + 1; rest > 0; rest = (rest - 1) / 26) {
    letters.insert(letters.begin(), static_cast<char>('A' + (rest - 1) % 26));
  }
  return letters;
}

std::string address(std::size_t row, std::size_t column) {
  return column_letters(column) + std::to_string(row + 1);
}

std::string stored_range(const std::string& sheet, std::size_t row, std::size_t column, std::size_t rows,
                         std::size_t columns) {
  std::string text = "$" + sheet + ".$" + column_letters(column) + "$" + std::to_string(row + 1);
  if (rows * columns > 1) {
    text += ":.$" + column_letters(column + columns - 1) + "$" + std::to_string(row + rows);
  }
  return text;
}

Sheet& Sheet::put(std::size_t row, std::size_t column, Content content, Style style) {
  cells_[{row, column}] = {std::move(content), style};
  return *this;
}

Sheet& Sheet::style(std::size_t row, std::size_t column, Style style) {
  cells_[{row, column}].style = style;
  return *this;
}

Sheet& Sheet::width(std::size_t column, double centimetres) {
  widths_[column] = centimetres;
  return *this;
}

Sheet& Sheet::freeze(std::size_t rows, std::size_t columns) {
  frozen_rows_ = rows;
  frozen_columns_ = columns;
  return *this;
}

Sheet& Workbook::add_sheet(const std::string& name) {
  const auto [place, added] = kept_.emplace(name, Sheet(name));
  if (!added) throw std::invalid_argument("two sheets of the name " + name);
  sheets_.push_back(&place->second);
  return place->second;
}

void Workbook::add_name(const std::string& name, const std::string& address) {
  names_.emplace_back(name, address);
}

std::string Workbook::xml() const {
  std::string out = R"(<?xml version="1.0" encoding="UTF-8"?>
<office:document xmlns:office="urn:oasis:names:tc:opendocument:xmlns:office:1.0" xmlns:style="urn:oasis:names:tc:opendocument:xmlns:style:1.0" xmlns:text="urn:oasis:names:tc:opendocument:xmlns:text:1.0" xmlns:table="urn:oasis:names:tc:opendocument:xmlns:table:1.0" xmlns:fo="urn:oasis:names:tc:opendocument:xmlns:xsl-fo-compatible:1.0" xmlns:svg="urn:oasis:names:tc:opendocument:xmlns:svg-compatible:1.0" xmlns:number="urn:oasis:names:tc:opendocument:xmlns:datastyle:1.0" xmlns:config="urn:oasis:names:tc:opendocument:xmlns:config:1.0" xmlns:of="urn:oasis:names:tc:opendocument:xmlns:of:1.2" office:version="1.3" office:mimetype="application/vnd.oasis.opendocument.spreadsheet">
  <office:settings>
    <config:config-item-set config:name="ooo:view-settings">
      <config:config-item-map-indexed config:name="Views">
        <config:config-item-map-entry>
          <config:config-item config:name="ViewId" config:type="string">view1</config:config-item>
          <config:config-item-map-named config:name="Tables">
)";
  for (const Sheet* sheet : sheets_) {
    out += "            <config:config-item-map-entry config:name=\"" + sheet->name_ + "\">\n";
    const auto item = [&](const char* name, const char* type, std::size_t value) {
      out += std::string("              <config:config-item config:name=\"") + name + "\" config:type=\"" +
             type + "\">" + std::to_string(value) + "</config:config-item>\n";
    };
    const bool rows = sheet->frozen_rows_ > 0, columns = sheet->frozen_columns_ > 0;
    item("HorizontalSplitMode", "short", columns ? 2 : 0);
    item("VerticalSplitMode", "short", rows ? 2 : 0);
    item("HorizontalSplitPosition", "int", sheet->frozen_columns_);
    item("VerticalSplitPosition", "int", sheet->frozen_rows_);
    item("ActiveSplitRange", "short", rows && columns ? 3 : columns ? 1 : rows ? 2 : 2);
    item("PositionRight", "int", sheet->frozen_columns_);
    item("PositionBottom", "int", sheet->frozen_rows_);
    out += "            </config:config-item-map-entry>\n";
  }
  out += R"(          </config:config-item-map-named>
          <config:config-item config:name="ActiveTable" config:type="string">)" +
         (shown_first_.empty() ? sheets_.front()->name_ : shown_first_) + R"(</config:config-item>
        </config:config-item-map-entry>
      </config:config-item-map-indexed>
    </config:config-item-set>
  </office:settings>
  <office:font-face-decls>
    <style:font-face style:name="Liberation Sans" svg:font-family="'Liberation Sans'" style:font-family-generic="swiss" style:font-pitch="variable"/>
  </office:font-face-decls>
)";
  out += styles;
  out += "  <office:automatic-styles>\n";
  std::map<std::string, double> widths{{width_style(default_width), default_width}};
  for (const Sheet* sheet : sheets_) {
    for (const auto& [column, width] : sheet->widths_) widths[width_style(width)] = width;
  }
  for (const auto& [name, width] : widths) {
    out += "    <style:style style:name=\"" + name +
           "\" style:family=\"table-column\"><style:table-column-properties "
           "style:column-width=\"" +
           shortest(width) + "cm\"/></style:style>\n";
  }
  out +=
      "    <style:style style:name=\"row\" style:family=\"table-row\"><style:table-row-properties "
      "style:use-optimal-row-height=\"true\"/></style:style>\n"
      "    <style:style style:name=\"sheet\" style:family=\"table\" style:master-page-name=\"Default\">"
      "<style:table-properties table:display=\"true\"/></style:style>\n";
  out += conditions;
  out += page;
  out +=
      "  <office:body>\n    <office:spreadsheet>\n"
      "      <table:calculation-settings table:automatic-find-labels=\"false\" "
      "table:use-regular-expressions=\"false\" table:use-wildcards=\"false\"/>\n";
  for (const Sheet* sheet : sheets_) {
    out += "      <table:table table:name=\"" + sheet->name_ + "\" table:style-name=\"sheet\">\n";
    std::size_t columns = 0;
    for (const auto& [place, cell] : sheet->cells_) columns = std::max(columns, place.second + 1);
    for (std::size_t j = 0; j < columns; ++j) {
      const auto width = sheet->widths_.find(j);
      out += "        <table:table-column table:style-name=\"" +
             width_style(width == sheet->widths_.end() ? default_width : width->second) + "\"/>\n";
    }
    std::size_t row = 0, column = 0;
    bool open = false;
    const auto close_row = [&] {
      if (open) out += "</table:table-row>\n";
      if (open && row == 0 && sheet->frozen_rows_ == 1) out += "        </table:table-header-rows>\n";
      open = false;
    };
    for (const auto& [place, cell] : sheet->cells_) {
      if (!open || place.first != row) {
        close_row();
        const std::size_t next = sheet->cells_.begin()->first == place ? 0 : row + 1;
        if (place.first > next) {
          out += "        <table:table-row table:style-name=\"row\"";
          if (place.first - next > 1) {
            out += " table:number-rows-repeated=\"" + std::to_string(place.first - next) + "\"";
          }
          out += "><table:table-cell/></table:table-row>\n";
        }
        row = place.first;
        column = 0;
        if (row == 0 && sheet->frozen_rows_ == 1) out += "        <table:table-header-rows>\n";
        out += "        <table:table-row table:style-name=\"row\">";
        open = true;
      }
      if (place.second > column) {
        out += "<table:table-cell";
        if (place.second - column > 1) {
          out += " table:number-columns-repeated=\"" + std::to_string(place.second - column) + "\"";
        }
        out += "/>";
      }
      column = place.second + 1;
      out += "<table:table-cell";
      if (cell.style != Style::plain)
        out += std::string(" table:style-name=\"") + style_name(cell.style) + "\"";
      if (const auto* number = std::get_if<double>(&cell.content)) {
        const std::string text = shortest(*number);
        out += " office:value-type=\"float\" office:value=\"" + text + "\"><text:p>" + text +
               "</text:p></table:table-cell>";
      } else if (const auto* text = std::get_if<std::string>(&cell.content)) {
        out += " office:value-type=\"string\"><text:p>" + escaped(*text) + "</text:p></table:table-cell>";
      } else if (const auto* date = std::get_if<Date>(&cell.content)) {
        out += " office:value-type=\"date\" office:date-value=\"" + date->day + "\"><text:p>" + date->day +
               "</text:p></table:table-cell>";
      } else if (const auto* formula = std::get_if<Formula>(&cell.content)) {
        out += " table:formula=\"" + escaped(formula->text) + "\"";
        if (formula->rows > 0) {
          out += " table:number-matrix-columns-spanned=\"" + std::to_string(formula->columns) +
                 "\" table:number-matrix-rows-spanned=\"" + std::to_string(formula->rows) + "\"";
        }
        out += "/>";
      } else {
        out += "/>";
      }
    }
    close_row();
    out += "      </table:table>\n";
  }
  out += "      <table:named-expressions>\n";
  for (const auto& [name, range] : names_) {
    out += "        <table:named-range table:name=\"" + name + "\" table:base-cell-address=\"$" +
           sheets_.front()->name_ + ".$A$1\" table:cell-range-address=\"" + range + "\"/>\n";
  }
  out +=
      "      </table:named-expressions>\n    </office:spreadsheet>\n  </office:body>\n</office:document>\n";
  return out;
}

}  // namespace unply::samples
