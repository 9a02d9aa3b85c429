// The sheet functions: read cells, analyse, make cells. A refusal is a cell with a sentence.
#include <sal/config.h>

#include <cmath>
#include <com/sun/star/lang/XServiceInfo.hpp>
#include <com/sun/star/uno/Exception.hpp>
#include <com/sun/star/uno/XComponentContext.hpp>
#include <cppuhelper/implbase3.hxx>
#include <cppuhelper/supportsservice.hxx>
#include <exception>
#include <mutex>
#include <unply/XActivity.hpp>
#include <unply/XSheetFunctions.hpp>
#include <utility>

#include "core/report/analysis.hpp"
#include "extension/cells/correlation_reader.hpp"
#include "extension/cells/range_reader.hpp"
#include "extension/cells/settings_reader.hpp"
#include "extension/cells/strings.hpp"
#include "extension/functions/shared_analyses.hpp"
#include "extension/text/text.hpp"

namespace unply::office {
namespace {

using com::sun::star::uno::Any;
using com::sun::star::uno::Sequence;
using rtl::OUString;
using AnyCells = Sequence<Sequence<Any>>;

/// What all cells of all documents share: numbers, and nothing of the office.
struct Shared {
  std::mutex one_at_a_time;
  SharedAnalyses analyses;
  sal_Int64 tables_read = 0;
};
Shared& shared() {
  static Shared everything;
  return everything;
}

/// Nothing is an empty text, which looks empty and never counts as a 0. A number that is none would show as an error of
/// the office: it is put in words.
Any to_any(const text::Cell& cell) {
  if (const auto* number = std::get_if<double>(&cell))
    return std::isfinite(*number) ? Any(*number) : Any(to_office(text::number(*number)));
  if (const auto* words = std::get_if<std::string>(&cell)) return Any(to_office(*words));
  return Any(OUString());
}

AnyCells to_any(const text::Cells& cells) {
  AnyCells result(static_cast<sal_Int32>(cells.size()));
  Sequence<Any>* row = result.getArray();
  for (const std::vector<text::Cell>& line : cells) {
    row->realloc(static_cast<sal_Int32>(line.size()));
    Any* at = row->getArray();
    for (const text::Cell& cell : line) *at++ = to_any(cell);
    ++row;
  }
  return result;
}

text::Cells fault(const std::string& what) {
  return {{text::sentence(Error(ErrorCode::internal, {{FactId::text, what}}))}};
}

text::Cells refusal(const Error& error) {
  try {
    return {{text::sentence(error)}};
  } catch (const std::exception& exception) {  // a sentence that misses its facts
    return fault(exception.what());
  }
}

/// The border: whatever happens inside, the office gets cells.
template <class Work>
AnyCells answer(Work work) {
  text::Cells cells;
  try {
    const std::scoped_lock lock(shared().one_at_a_time);
    cells = work();
  } catch (const Error& error) {
    cells = refusal(error);
  } catch (const com::sun::star::uno::Exception& exception) {
    cells = fault(to_utf8(exception.Message));
  } catch (const std::exception& exception) {
    cells = fault(exception.what());
  } catch (...) {
    cells = fault("?");
  }
  return to_any(cells);
}

struct Asked {
  std::shared_ptr<const Analysis> analysis;
  std::vector<Phrase> notes;
  Settings settings;
};

ReadOptions options_of(const Settings& settings) {
  return {settings.headings, settings.model.visible_rows_only};
}

/// The analysis behind a function's arguments.
Asked analysis_of(const CellRange& response, const CellRange& predictors, const Any& settings,
                  bool needs_response) {
  Asked asked;
  asked.settings = read_settings(cells_of(settings), settings_for_rows());
  Model& model = asked.settings.model;
  ReadData data = read_data(response, predictors, options_of(asked.settings));
  ++shared().tables_read;
  if (!data.response.empty()) {
    if (!model.response.empty() && data.table->find(model.response) != 0)
      throw Error(ErrorCode::impossible_setting,
                  {{FactId::setting, text::setting_name(text::SettingId::response)},
                   {FactId::value, model.response},
                   {FactId::allowed, data.response}});
    model.response = data.response;
  }
  if (needs_response && model.response.empty()) throw Error(ErrorCode::response_missing);
  asked.analysis = shared().analyses.of(std::move(data.table), model);
  asked.notes = std::move(data.notes);
  return asked;
}

text::Cells table_of(BlockId block, const CellRange& predictors, const Any& settings) {
  const Asked asked = analysis_of({}, predictors, settings, false);
  return text::cells(table_block(block, *asked.analysis, asked.notes));
}

text::Cells table_of(BlockId block, const CellRange& response, const CellRange& predictors,
                     const Any& settings) {
  const Asked asked = analysis_of(response, predictors, settings, true);
  return text::cells(table_block(block, *asked.analysis, asked.notes));
}

text::Cells predictions_of(const CellRange& response, const CellRange& predictors, const CellRange& new_rows,
                           const Any& settings) {
  const Asked asked = analysis_of(response, predictors, settings, true);
  ReadOptions options = options_of(asked.settings);
  options.visible_rows_only = false;  // every new row gets its prediction
  TableBlock block = predictions_block(
      *asked.analysis, read_table(new_rows, text::argument_name(text::ArgumentId::new_rows), options));
  block.notes.insert(block.notes.begin(), asked.notes.begin(), asked.notes.end());
  return text::cells(block);
}

text::Cells table_from_correlations(const CellRange& correlations, double n, const Any& settings) {
  const Settings asked = read_settings(cells_of(settings), settings_for_correlations());
  const PlainCells cells = read_cells(correlations, text::argument_name(text::ArgumentId::correlations));
  const CorrelationTable table = read_correlations(cells, n, asked);
  Model model = asked.model;
  model.response = table.response;
  const BlockId usual = table.response.empty() ? BlockId::inflation : BlockId::estimates;
  return text::cells(table_block(asked.table.value_or(usual), Analysis(table, model)));
}

class SheetFunctions : public cppu::WeakImplHelper3<unply::XSheetFunctions, unply::XActivity,
                                                    com::sun::star::lang::XServiceInfo> {
 public:
  AnyCells SAL_CALL VIF(const CellRange& predictors, const Any& settings) override {
    return answer([&] { return table_of(BlockId::inflation, predictors, settings); });
  }
  AnyCells SAL_CALL CONDITION(const CellRange& predictors, const Any& settings) override {
    return answer([&] { return table_of(BlockId::condition, predictors, settings); });
  }
  AnyCells SAL_CALL DEPENDENCIES(const CellRange& predictors, const Any& settings) override {
    return answer([&] { return table_of(BlockId::dependencies, predictors, settings); });
  }
  AnyCells SAL_CALL ESTIMATES(const CellRange& response, const CellRange& predictors,
                              const Any& settings) override {
    return answer([&] { return table_of(BlockId::estimates, response, predictors, settings); });
  }
  AnyCells SAL_CALL FITQUALITY(const CellRange& response, const CellRange& predictors,
                               const Any& settings) override {
    return answer([&] { return table_of(BlockId::fit_quality, response, predictors, settings); });
  }
  AnyCells SAL_CALL LEDGER(const CellRange& response, const CellRange& predictors,
                           const Any& settings) override {
    return answer([&] { return table_of(BlockId::ledger, response, predictors, settings); });
  }
  AnyCells SAL_CALL GROUPS(const CellRange& response, const CellRange& predictors,
                           const Any& settings) override {
    return answer([&] { return table_of(BlockId::groups, response, predictors, settings); });
  }
  AnyCells SAL_CALL PREDICT(const CellRange& response, const CellRange& predictors, const CellRange& newrows,
                            const Any& settings) override {
    return answer([&] { return predictions_of(response, predictors, newrows, settings); });
  }
  AnyCells SAL_CALL ROWSNEEDED(const CellRange& response, const CellRange& predictors,
                               const Any& settings) override {
    return answer([&] { return table_of(BlockId::rows_needed, response, predictors, settings); });
  }
  AnyCells SAL_CALL FROMCORRELATIONS(const CellRange& correlations, double n, const Any& settings) override {
    return answer([&] { return table_from_correlations(correlations, n, settings); });
  }

  sal_Int64 SAL_CALL getTablesRead() override { return shared().tables_read; }
  sal_Int64 SAL_CALL getAnalysesBegun() override { return shared().analyses.begun(); }

  OUString SAL_CALL getImplementationName() override { return "unply.SheetFunctions"; }
  sal_Bool SAL_CALL supportsService(const OUString& name) override {
    return cppu::supportsService(this, name);
  }
  Sequence<OUString> SAL_CALL getSupportedServiceNames() override {
    Sequence<OUString> names(1);
    names[0] = "UNPLY";
    return names;
  }
};

}  // namespace
}  // namespace unply::office

extern "C" SAL_DLLPUBLIC_EXPORT com::sun::star::uno::XInterface* unply_sheet_functions(
    com::sun::star::uno::XComponentContext*, const com::sun::star::uno::Sequence<com::sun::star::uno::Any>&) {
  return cppu::acquire(new unply::office::SheetFunctions);
}
