// The service unply.Workbench: the whole way from a range of a document to its report sheets.
#include <sal/config.h>

#include <algorithm>
#include <com/sun/star/beans/XPropertySet.hpp>
#include <com/sun/star/container/XNameAccess.hpp>
#include <com/sun/star/document/XUndoManagerSupplier.hpp>
#include <com/sun/star/frame/XModel.hpp>
#include <com/sun/star/lang/XServiceInfo.hpp>
#include <com/sun/star/sheet/XCellRangeData.hpp>
#include <com/sun/star/sheet/XCellRangeReferrer.hpp>
#include <com/sun/star/sheet/XCellRangesAccess.hpp>
#include <com/sun/star/sheet/XSpreadsheet.hpp>
#include <com/sun/star/sheet/XSpreadsheetView.hpp>
#include <com/sun/star/sheet/XSpreadsheets.hpp>
#include <com/sun/star/uno/XComponentContext.hpp>
#include <cppuhelper/implbase2.hxx>
#include <cppuhelper/supportsservice.hxx>
#include <ctime>
#include <exception>
#include <memory>
#include <rtl/uri.hxx>
#include <unply/Refusal.hpp>
#include <unply/XWorkbench.hpp>
#include <utility>

#include "core/report/analysis.hpp"
#include "extension/cells/range_reader.hpp"
#include "extension/cells/report_writer.hpp"
#include "extension/cells/settings_reader.hpp"
#include "extension/cells/uno.hpp"
#include "extension/charts/chart_writer.hpp"
#include "extension/text/text.hpp"

namespace unply::office {
namespace {

using css::sheet::XSpreadsheetDocument;
using AnyLines = Sequence<Sequence<Any>>;
using Document = Reference<XSpreadsheetDocument>;

constexpr const char* model_block = "Unply_model";

/// Everything in its life is one step of Undo; where it ends by an exception, the step is taken back.
class UndoStep {
 public:
  explicit UndoStep(const Document& document)
      : manager_(Reference<css::document::XUndoManagerSupplier>(document, UNO_QUERY_THROW)->getUndoManager()),
        exceptions_(std::uncaught_exceptions()) {
    manager_->enterUndoContext(to_office(text::label(text::LabelId::undo_report)));
  }
  UndoStep(const UndoStep&) = delete;
  UndoStep& operator=(const UndoStep&) = delete;
  ~UndoStep() {
    try {
      manager_->leaveUndoContext();
      if (std::uncaught_exceptions() > exceptions_ && manager_->isUndoPossible()) manager_->undo();
    } catch (const css::uno::Exception&) {  // a document that is closing has no steps to take back
    }
  }

 private:
  Reference<css::document::XUndoManager> manager_;
  int exceptions_;
};

/// No repainting in its life.
class Still {
 public:
  explicit Still(const Document& document) : model_(document, UNO_QUERY_THROW) { model_->lockControllers(); }
  Still(const Still&) = delete;
  Still& operator=(const Still&) = delete;
  ~Still() {
    try {
      model_->unlockControllers();
    } catch (const css::uno::Exception&) {  // closing: nothing is painted any more
    }
  }

 private:
  Reference<css::frame::XModel> model_;
};

/// A range by its name in one of the document's lists of names.
CellRange named(const Document& document, const char* list, const OUString& name) {
  const auto names = get_property<Reference<css::container::XNameAccess>>(document, list);
  if (!names.is() || !names->hasByName(name)) return {};
  const Reference<css::sheet::XCellRangeReferrer> referrer(names->getByName(name), UNO_QUERY);
  return referrer.is() ? referrer->getReferredCells() : CellRange();
}

AnyLines data_of(const CellRange& range) {
  return Reference<css::sheet::XCellRangeData>(range, UNO_QUERY_THROW)->getDataArray();
}

/// `Sheet1.A1:H240`, `A1:H240` of the first sheet, or the name of a range. Throws Error no_such_range.
CellRange range_of(const Document& document, const std::string& words) {
  const OUString name = to_office(words).trim();
  for (const char* list : {"NamedRanges", "DatabaseRanges"})
    if (const CellRange range = named(document, list, name); range.is()) return range;
  try {
    const Reference<css::sheet::XCellRangesAccess> sheets(document->getSheets(), UNO_QUERY_THROW);
    const Sequence<CellRange> ranges = sheets->getCellRangesByName(name);
    if (ranges.getLength() == 1 && ranges[0].is()) return ranges[0];
  } catch (const css::uno::Exception&) {  // no address either
  }
  throw Error(ErrorCode::no_such_range, {{FactId::range, words}});
}

/// `$'Kiln log'.$A$1:$J$241` -> `'Kiln log'.A1:J241`
std::string readable_address(const CellRange& range) {
  std::string address;
  bool quoted = false;
  for (char sign : to_utf8(get_property<OUString>(range, "AbsoluteName"))) {
    if (sign == '\'') quoted = !quoted;
    if (sign != '$' || quoted) address += sign;
  }
  return address;
}

std::string today() {
  const std::time_t now = std::time(nullptr);
  std::tm parts{};
  localtime_r(&now, &parts);
  char buffer[16] = {};
  std::strftime(buffer, sizeof buffer, "%Y-%m-%d", &parts);
  return buffer;
}

/// Name of the document's file; of one that was never saved its title.
std::string file_of(const Document& document) {
  const Reference<css::frame::XModel> model(document, UNO_QUERY_THROW);
  const OUString url = model->getURL();
  if (url.isEmpty()) return {};
  const OUString last = url.copy(url.lastIndexOf('/') + 1);
  return to_utf8(rtl::Uri::decode(last, rtl_UriDecodeWithCharset, RTL_TEXTENCODING_UTF8));
}

std::vector<std::string> lines_of(const Settings& settings) {
  std::vector<std::string> lines;
  for (const std::vector<text::Cell>& line : settings_lines(settings)) {
    std::string words;
    for (const text::Cell& cell : line) {
      if (!words.empty()) words += " = ";
      if (const auto* part = std::get_if<std::string>(&cell)) words += *part;
      if (const auto* part = std::get_if<double>(&cell)) words += text::number(*part, 15);
    }
    lines.push_back(words);
  }
  return lines;
}

/// Settings as a cell range, or as an array of lines in any of the ways that the languages of the office make
/// one.
text::Cells settings_cells(const Any& argument) {
  CellRange range;
  if ((argument >>= range) && range.is()) return cells_of(css::uno::makeAny(data_of(range)));
  Sequence<Any> lines;
  if (!(argument >>= lines)) return cells_of(argument);
  AnyLines block(lines.getLength());
  Sequence<Any>* at = block.getArray();
  for (sal_Int32 i = 0; i < lines.getLength(); ++i, ++at) {
    Sequence<OUString> words;
    if (lines[i] >>= *at) continue;
    if (!(lines[i] >>= words)) throw Error(ErrorCode::settings_shape, {{FactId::range, std::string("?")}});
    at->realloc(words.getLength());
    for (sal_Int32 j = 0; j < words.getLength(); ++j) at->getArray()[j] <<= words[j];
  }
  return cells_of(css::uno::makeAny(block));
}

Report report_of(const Document& document, const Any& data, const Any& settings_argument) {
  if (!document.is()) throw Error(ErrorCode::not_a_spreadsheet);
  Settings settings = read_settings(settings_cells(settings_argument), settings_for_rows());
  CellRange range;
  OUString name;
  if (data >>= name) {
    range = range_of(document, to_utf8(name));
  } else if (!(data >>= range) || !range.is()) {
    if (!settings.data)
      throw Error(ErrorCode::no_data_named, {{FactId::setting, text::setting_name(text::SettingId::data)}});
    range = range_of(document, *settings.data);
  }
  if (settings.model.response.empty()) throw Error(ErrorCode::response_missing);
  ReadData read = read_data({}, range, {settings.headings, settings.model.visible_rows_only});
  const Analysis analysis(read.table, settings.model);
  ReportContext context;
  context.data_range = readable_address(range);
  context.file = file_of(document);
  context.version = UNPLY_VERSION;
  context.date = today();
  context.settings = lines_of(settings);
  context.notes = std::move(read.notes);
  return full_report(analysis, context);
}

Sequence<unply::TermFinding> verdicts_of(const Report& report) {
  const std::vector<TermLine> lines = term_lines(report);
  Sequence<unply::TermFinding> verdicts(static_cast<sal_Int32>(lines.size()));
  unply::TermFinding* at = verdicts.getArray();
  for (const TermLine& line : lines)
    *at++ = unply::TermFinding(to_office(line.term), to_office(line.verdict), to_office(line.finding),
                               line.estimate, line.lower, line.upper);
  return verdicts;
}

class Workbench : public cppu::WeakImplHelper2<unply::XWorkbench, css::lang::XServiceInfo> {
 public:
  explicit Workbench(Reference<css::uno::XComponentContext> context) : context_(std::move(context)) {}

  AnyLines SAL_CALL readModel(const Document& document) override {
    return guarded([&] {
      if (!document.is()) throw Error(ErrorCode::not_a_spreadsheet);
      const CellRange block = named(document, "NamedRanges", OUString::createFromAscii(model_block));
      if (!block.is()) throw Error(ErrorCode::no_model_block, {{FactId::name, std::string(model_block)}});
      return data_of(block);
    });
  }

  Sequence<unply::TermFinding> SAL_CALL analyse(const Document& document, const Any& data,
                                                const Any& settings) override {
    return guarded([&] { return verdicts_of(report_of(document, data, settings)); });
  }

  unply::WrittenReport SAL_CALL writeReport(const Document& document, const Any& data,
                                            const Any& settings) override {
    return guarded([&] {
      if (document.is()) check_writable(document);
      const Report report = report_of(document, data, settings);
      const std::vector<OUString> sheets = written(document, report);
      unply::WrittenReport result;
      result.Sheets = Sequence<OUString>(static_cast<sal_Int32>(sheets.size()));
      std::copy(sheets.begin(), sheets.end(), result.Sheets.getArray());
      result.Verdicts = verdicts_of(report);
      show(document, sheets.front());
      return result;
    });
  }

  OUString SAL_CALL getImplementationName() override { return "unply.Workbench"; }
  sal_Bool SAL_CALL supportsService(const OUString& name) override {
    return cppu::supportsService(this, name);
  }
  Sequence<OUString> SAL_CALL getSupportedServiceNames() override {
    Sequence<OUString> names(1);
    names[0] = "unply.Workbench";
    return names;
  }

 private:
  /// The border: a refusal becomes an exception with a sentence, a fault of ours one that says so.
  template <class Work>
  auto guarded(Work work) -> decltype(work()) {
    try {
      return work();
    } catch (const Error& error) {
      if (error.code == ErrorCode::internal) throw fault(text::sentence(error));
      throw unply::Refusal(to_office(text::sentence(error)), *this);
    } catch (const css::uno::Exception&) { throw; } catch (const std::exception& exception) {
      throw fault(
          text::sentence(Error(ErrorCode::internal, {{FactId::text, std::string(exception.what())}})));
    }
  }

  css::uno::RuntimeException fault(const std::string& words) { return {to_office(words), *this}; }

  std::vector<OUString> written(const Document& document, const Report& report) const {
    const Still still(document);
    const UndoStep step(document);
    const WrittenSheets sheets = write_sheets(document, report);
    for (const ChartPlace& place : sheets.charts) write_chart(context_, document, place);
    return sheets.names;
  }

  static void show(const Document& document, const OUString& sheet) {
    const Reference<css::frame::XModel> model(document, UNO_QUERY_THROW);
    const Reference<css::sheet::XSpreadsheetView> view(model->getCurrentController(), UNO_QUERY);
    if (view.is())
      view->setActiveSheet(
          Reference<css::sheet::XSpreadsheet>(document->getSheets()->getByName(sheet), UNO_QUERY_THROW));
  }

  Reference<css::uno::XComponentContext> context_;
};

}  // namespace
}  // namespace unply::office

extern "C" SAL_DLLPUBLIC_EXPORT com::sun::star::uno::XInterface* unply_workbench(
    com::sun::star::uno::XComponentContext* context,
    const com::sun::star::uno::Sequence<com::sun::star::uno::Any>&) {
  return cppu::acquire(new unply::office::Workbench(context));
}
