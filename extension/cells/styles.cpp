#include "extension/cells/styles.hpp"

#include <algorithm>
#include <com/sun/star/awt/FontWeight.hpp>
#include <com/sun/star/container/XIndexAccess.hpp>
#include <com/sun/star/container/XNameContainer.hpp>
#include <com/sun/star/lang/Locale.hpp>
#include <com/sun/star/lang/XMultiServiceFactory.hpp>
#include <com/sun/star/sheet/XHeaderFooterContent.hpp>
#include <com/sun/star/sheet/XSpreadsheet.hpp>
#include <com/sun/star/sheet/XSpreadsheets.hpp>
#include <com/sun/star/style/XStyle.hpp>
#include <com/sun/star/style/XStyleFamiliesSupplier.hpp>
#include <com/sun/star/table/BorderLine2.hpp>
#include <com/sun/star/table/BorderLineStyle.hpp>
#include <com/sun/star/table/CellHoriJustify.hpp>
#include <com/sun/star/table/CellVertJustify2.hpp>
#include <com/sun/star/text/XText.hpp>
#include <com/sun/star/util/XNumberFormats.hpp>
#include <com/sun/star/util/XNumberFormatsSupplier.hpp>
#include <com/sun/star/util/XProtectable.hpp>

#include "extension/cells/fonts.hpp"

namespace unply::office {
namespace {

using css::table::BorderLine2;
using css::table::CellHoriJustify;

constexpr double points_to_hundredths = 2540.0 / 72;

/// What a style adds to the page style of the cells, beside its font.
struct Look {
  const char* name;
  CellHoriJustify justify = css::table::CellHoriJustify_LEFT;
  bool wraps = true;
  const char* format = "@";  // in English notation; text stays text when a cell is edited again
  sal_Int32 ink = colour::black;
  sal_Int32 line_below = -1;  // colour; -1: none
  double line_points = 0.5;
  sal_Int32 bar = -1;  // colour of the bar to the left
  sal_Int32 vertical = css::table::CellVertJustify2::TOP;
};

Look look_of(StyleId id) {
  constexpr CellHoriJustify right = css::table::CellHoriJustify_RIGHT;
  constexpr CellHoriJustify left = css::table::CellHoriJustify_LEFT;
  constexpr sal_Int32 bottom = css::table::CellVertJustify2::BOTTOM;
  Look look{};
  switch (id) {
    case StyleId::page:
      return {.name = "Unply", .format = nullptr};
    case StyleId::title:
      return {.name = "Unply title"};
    case StyleId::section:
      return {.name = "Unply section", .line_below = colour::blue, .line_points = 1};
    case StyleId::block_title:
      return {.name = "Unply table title"};
    case StyleId::heading:
      return {
          .name = "Unply heading", .line_below = colour::dark_grey, .line_points = 0.75, .vertical = bottom};
    case StyleId::inner_heading:
      return {.name = "Unply inner heading",
              .line_below = colour::dark_grey,
              .line_points = 0.75,
              .vertical = bottom};
    case StyleId::number_heading:
      return {.name = "Unply heading of numbers",
              .justify = right,
              .line_below = colour::dark_grey,
              .line_points = 0.75,
              .vertical = bottom};
    case StyleId::label:
      return {.name = "Unply label", .ink = colour::dark_grey};
    case StyleId::words:
      return {.name = "Unply words", .line_below = colour::light_grey};
    case StyleId::inner_words:
      return {.name = "Unply inner words", .line_below = colour::light_grey};
    case StyleId::right_words:
      return {.name = "Unply words among numbers", .justify = right, .line_below = colour::light_grey};
    case StyleId::number:
      look = {.name = "Unply number", .format = "#,##0"};
      break;
    case StyleId::first_number:
      look = {.name = "Unply first number", .format = "#,##0"};
      break;
    case StyleId::count:
      look = {.name = "Unply count", .format = "#,##0"};
      break;
    case StyleId::whole:
      look = {.name = "Unply whole number", .format = "0"};
      break;
    case StyleId::p_value:
      look = {.name = "Unply p", .format = "0.0000"};
      break;
    case StyleId::percent:
      look = {.name = "Unply percentage", .format = "0"};
      break;
    case StyleId::scientific:
      look = {.name = "Unply scientific", .format = "0"};
      break;
    case StyleId::value:
      return {.name = "Unply value"};
    case StyleId::percent_value:
      return {.name = "Unply value in percent", .format = "0"};
    case StyleId::note:
      return {.name = "Unply note", .ink = colour::dark_grey};
    case StyleId::sentence:
      return {.name = "Unply sentence"};
    case StyleId::mark_clear:
      return {.name = "Unply clear", .bar = colour::blue};
    case StyleId::mark_ruled_out:
      return {.name = "Unply ruled out", .bar = colour::bluish_green};
    case StyleId::mark_undecided:
      return {.name = "Unply undecided", .bar = colour::vermillion};
    case StyleId::mark_not_estimable:
      return {.name = "Unply not estimable", .bar = colour::reddish_purple};
  }
  look.justify = id == StyleId::first_number ? left : right;
  look.wraps = false;
  look.line_below = colour::light_grey;
  return look;
}

bool has_decimals(StyleId id) {
  return id == StyleId::number || id == StyleId::first_number || id == StyleId::percent ||
         id == StyleId::percent_value || id == StyleId::scientific;
}

/// In English notation.
OUString format_code(const CellStyle& style, const Look& look) {
  OUString code = OUString::createFromAscii(look.format);
  if (!has_decimals(style.id)) return code;
  if (style.decimals > 0) {
    code += ".";
    for (int k = 0; k < style.decimals; ++k) code += "0";
  }
  if (style.id == StyleId::scientific) code += "E+00";
  if (style.id == StyleId::percent || style.id == StyleId::percent_value) code += " %";
  return code;
}

BorderLine2 line(sal_Int32 colour, double points) {
  BorderLine2 border;
  border.Color = colour;
  border.OuterLineWidth = static_cast<sal_Int16>(points * points_to_hundredths);
  border.LineWidth = static_cast<sal_uInt32>(points * points_to_hundredths);
  border.LineStyle = css::table::BorderLineStyle::SOLID;
  return border;
}

/// Key of a format given in English notation, in the notation of the document's language.
sal_Int32 number_format_key(const Reference<css::sheet::XSpreadsheetDocument>& document,
                            const OUString& english) {
  const Reference<css::util::XNumberFormatsSupplier> supplier(document, UNO_QUERY_THROW);
  const Reference<css::util::XNumberFormats> formats = supplier->getNumberFormats();
  const css::lang::Locale source("en", "US", "");
  const auto target = get_property<css::lang::Locale>(document, "CharLocale");
  return formats->addNewConverted(english, source, target);
}

/// p below 0.0001 is shown as just that. The words in quotes are not converted, so they need the language's own sign.
sal_Int32 p_value_format_key(const Reference<css::sheet::XSpreadsheetDocument>& document) {
  const Reference<css::util::XNumberFormatsSupplier> supplier(document, UNO_QUERY_THROW);
  const auto plain = get_property<OUString>(
      supplier->getNumberFormats()->getByKey(number_format_key(document, "0.0")), "FormatString");
  const OUString sign = plain.copy(1, plain.getLength() - 2);
  return number_format_key(document, "[<0.0001]\"<0" + sign + "0001\";0.0000");
}

Reference<css::container::XNameContainer> family(const Reference<css::sheet::XSpreadsheetDocument>& document,
                                                 const char* name) {
  const Reference<css::style::XStyleFamiliesSupplier> supplier(document, UNO_QUERY_THROW);
  return Reference<css::container::XNameContainer>(
      supplier->getStyleFamilies()->getByName(OUString::createFromAscii(name)), UNO_QUERY_THROW);
}

Reference<css::style::XStyle> new_style(const Reference<css::sheet::XSpreadsheetDocument>& document,
                                        const char* service) {
  const Reference<css::lang::XMultiServiceFactory> factory(document, UNO_QUERY_THROW);
  return Reference<css::style::XStyle>(factory->createInstance(OUString::createFromAscii(service)),
                                       UNO_QUERY_THROW);
}

/// Sets the looks on a style, or on cells where `whole` asks for what a style inherits from the page style
/// too.
void set_looks(const Reference<css::sheet::XSpreadsheetDocument>& document,
               const Reference<css::uno::XInterface>& made, const CellStyle& style, bool whole) {
  const Look look = look_of(style.id);
  const Font font = font_of(style.id);
  set_property(made, "CharHeight", static_cast<float>(font.points));
  if (whole || style.id == StyleId::page) {
    set_property(made, "CharFontName", OUString::createFromAscii(font_name));
    set_property(made, "CellBackColor", colour::white);
    set_property(made, "CharColor", colour::black);
    set_property(made, "CharWeight", css::awt::FontWeight::NORMAL);
  }
  if (style.id == StyleId::page) return;
  if (font.bold) set_property(made, "CharWeight", css::awt::FontWeight::BOLD);
  if (look.ink != colour::black) set_property(made, "CharColor", look.ink);
  set_property(made, "HoriJustify", look.justify);
  set_property(made, "VertJustify", look.vertical);
  set_property(made, "IsTextWrapped", look.wraps);
  set_property(made, "NumberFormat", style.id == StyleId::p_value
                                         ? p_value_format_key(document)
                                         : number_format_key(document, format_code(style, look)));
  set_property(made, "ParaTopMargin", sal_Int32(air_of(style.id)));
  set_property(made, "ParaBottomMargin", sal_Int32(air_of(style.id)));
  if (look.line_below >= 0) set_property(made, "BottomBorder2", line(look.line_below, look.line_points));
  constexpr sal_Int32 usual_edge = 35;
  if (indent_of(style.id) > 0)
    set_property(made, "ParaLeftMargin", sal_Int32(usual_edge + indent_of(style.id)));
  if (look.bar >= 0) set_property(made, "LeftBorder2", line(look.bar, 3));
}

OUString name_of(const CellStyle& style) {
  const OUString name = OUString::createFromAscii(look_of(style.id).name);
  return has_decimals(style.id) ? name + " " + OUString::number(style.decimals) : name;
}

bool any_sheet_protected(const Reference<css::sheet::XSpreadsheetDocument>& document) {
  const Reference<css::container::XIndexAccess> sheets(document->getSheets(), UNO_QUERY_THROW);
  for (sal_Int32 k = 0; k < sheets->getCount(); ++k)
    if (Reference<css::util::XProtectable>(sheets->getByIndex(k), UNO_QUERY_THROW)->isProtected())
      return true;
  return false;
}

void write_line(const Reference<css::lang::XMultiServiceFactory>& factory,
                const Reference<css::text::XText>& text, const char* field) {
  const Reference<css::text::XTextContent> content(factory->createInstance(OUString::createFromAscii(field)),
                                                   UNO_QUERY_THROW);
  text->setString(OUString());
  text->insertTextContent(Reference<css::text::XTextRange>(text->createTextCursor(), UNO_QUERY_THROW),
                          content, false);
}

/// Name of the sheet above, number of the page below.
void write_page_lines(const Reference<css::sheet::XSpreadsheetDocument>& document,
                      const Reference<css::style::XStyle>& style) {
  const Reference<css::lang::XMultiServiceFactory> factory(document, UNO_QUERY_THROW);
  for (const bool header : {true, false}) {
    const char* property = header ? "RightPageHeaderContent" : "RightPageFooterContent";
    const auto content = get_property<Reference<css::sheet::XHeaderFooterContent>>(style, property);
    content->getCenterText()->setString(OUString());
    if (header)
      write_line(factory, content->getLeftText(), "com.sun.star.text.TextField.SheetName");
    else
      write_line(factory, content->getRightText(), "com.sun.star.text.TextField.PageNumber");
    set_property(style, property, content);
  }
}

}  // namespace

CellStyles::CellStyles(const Reference<css::sheet::XSpreadsheetDocument>& document)
    : document_(document), may_make_(!any_sheet_protected(document)) {}

bool CellStyles::make(const CellStyle& style, const OUString& name) {
  const auto known = made_.find(style);
  if (known != made_.end()) return known->second;
  const Reference<css::container::XNameContainer> styles = family(document_, "CellStyles");
  bool there = styles->hasByName(name);
  if (!there && may_make_) {
    if (style.id != StyleId::page) make({StyleId::page}, name_of({StyleId::page}));
    const Reference<css::style::XStyle> made = new_style(document_, "com.sun.star.style.CellStyle");
    styles->insertByName(name, css::uno::makeAny(made));
    made->setParentStyle(style.id == StyleId::page ? OUString("Default") : name_of({StyleId::page}));
    set_looks(document_, made, style, false);
    there = true;
  }
  return made_[style] = there;
}

void CellStyles::apply(const CellStyle& style, const Reference<css::uno::XInterface>& cells) {
  const OUString name = name_of(style);
  if (make(style, name))
    set_property(cells, "CellStyle", name);
  else
    set_looks(document_, cells, style, true);
}

Paper paper_of(const Reference<css::sheet::XSpreadsheetDocument>& document) {
  constexpr sal_Int32 narrowest = 17000, widest = 33000, lowest = 25000, highest = 45000;
  const Reference<css::container::XIndexAccess> sheets(document->getSheets(), UNO_QUERY_THROW);
  const Reference<css::sheet::XSpreadsheet> first(sheets->getByIndex(0), UNO_QUERY_THROW);
  const Reference<css::container::XNameContainer> pages = family(document, "PageStyles");
  const auto name = get_property<OUString>(first, "PageStyle");
  if (pages->hasByName(name)) {
    const Reference<css::style::XStyle> style(pages->getByName(name), UNO_QUERY_THROW);
    const auto width = get_property<sal_Int32>(style, "Width"),
               height = get_property<sal_Int32>(style, "Height");
    const Paper paper{std::min(width, height), std::max(width, height)};
    if (paper.width >= narrowest && paper.width <= widest && paper.height >= lowest &&
        paper.height <= highest)
      return paper;
  }
  const auto locale = get_property<css::lang::Locale>(document, "CharLocale");
  for (const char* country : {"US", "CA", "MX", "CL", "CO", "CR", "GT", "NI", "PA", "PH", "PR", "SV", "VE"})
    if (locale.Country.equalsAscii(country)) return {21590, 27940};
  return {};
}

OUString page_style(const Reference<css::sheet::XSpreadsheetDocument>& document, const Paper& paper,
                    bool landscape) {
  const OUString name = landscape ? OUString("Unply tables") : OUString("Unply text");
  const Reference<css::container::XNameContainer> pages = family(document, "PageStyles");
  if (pages->hasByName(name)) return name;
  const Reference<css::style::XStyle> style = new_style(document, "com.sun.star.style.PageStyle");
  pages->insertByName(name, css::uno::makeAny(style));
  set_property(style, "IsLandscape", landscape);
  set_property(style, "Width", sal_Int32(landscape ? paper.height : paper.width));
  set_property(style, "Height", sal_Int32(landscape ? paper.width : paper.height));
  for (const char* side : {"LeftMargin", "RightMargin"})
    set_property(style, side, sal_Int32(margin_sides(landscape)));
  set_property(style, "TopMargin", sal_Int32(margin_top));
  set_property(style, "BottomMargin", sal_Int32(margin_bottom));
  for (const char* line : {"Header", "Footer"}) {
    const rtl::OString prefix(line);
    set_property(style, (prefix + "IsOn").getStr(), true);
    set_property(style, (prefix + "IsDynamicHeight").getStr(), false);
    set_property(style, (prefix + "IsShared").getStr(), true);
    set_property(style, (prefix + "BodyDistance").getStr(), sal_Int32(page_line / 3));
    set_property(style, (prefix + "Height").getStr(), sal_Int32(page_line));
  }
  set_property(style, "FirstPageNumber", sal_Int16(0));  // goes on from the sheet before
  write_page_lines(document, style);
  set_property(style, "PrintGrid", false);
  set_property(style, "PrintHeaders", false);
  set_property(style, "ScaleToPagesX", sal_Int16(1));
  set_property(style, "ScaleToPagesY", sal_Int16(0));
  return name;
}

}  // namespace unply::office
