#include "extension/charts/chart_writer.hpp"

#include <algorithm>
#include <array>
#include <com/sun/star/awt/FontWeight.hpp>
#include <com/sun/star/awt/Size.hpp>
#include <com/sun/star/beans/XPropertySet.hpp>
#include <com/sun/star/chart/ChartAxisLabelPosition.hpp>
#include <com/sun/star/chart/ChartAxisPosition.hpp>
#include <com/sun/star/chart/ChartLegendPosition.hpp>
#include <com/sun/star/chart/ErrorBarStyle.hpp>
#include <com/sun/star/chart/XAxisXSupplier.hpp>
#include <com/sun/star/chart/XAxisYSupplier.hpp>
#include <com/sun/star/chart/XChartDocument.hpp>
#include <com/sun/star/chart2/AxisOrientation.hpp>
#include <com/sun/star/chart2/Symbol.hpp>
#include <com/sun/star/chart2/SymbolStyle.hpp>
#include <com/sun/star/chart2/XChartDocument.hpp>
#include <com/sun/star/chart2/XChartTypeContainer.hpp>
#include <com/sun/star/chart2/XCoordinateSystemContainer.hpp>
#include <com/sun/star/chart2/XDataSeriesContainer.hpp>
#include <com/sun/star/chart2/data/XDataProvider.hpp>
#include <com/sun/star/chart2/data/XDataSink.hpp>
#include <com/sun/star/chart2/data/XDataSource.hpp>
#include <com/sun/star/chart2/data/XLabeledDataSequence.hpp>
#include <com/sun/star/document/XEmbeddedObjectSupplier.hpp>
#include <com/sun/star/drawing/FillStyle.hpp>
#include <com/sun/star/drawing/LineDash.hpp>
#include <com/sun/star/drawing/LineStyle.hpp>
#include <com/sun/star/lang/XMultiServiceFactory.hpp>
#include <com/sun/star/sheet/XCellRangeAddressable.hpp>
#include <com/sun/star/sheet/XSpreadsheet.hpp>
#include <com/sun/star/sheet/XSpreadsheets.hpp>
#include <com/sun/star/table/XTableCharts.hpp>
#include <com/sun/star/table/XTableChartsSupplier.hpp>
#include <utility>

#include "extension/cells/styles.hpp"

namespace unply::office {
namespace {

namespace chart2 = css::chart2;
namespace data = css::chart2::data;

constexpr float title_points = 10.5F, label_points = 9, dense_points = 8;
constexpr int roomy = 400;  // height for a name from which it is written in the usual size
constexpr sal_Int32 interval_line = 50, mark_line = 30, point_size = 240, bar_gap = 60;

class ChartWriter {
 public:
  ChartWriter(const Reference<css::uno::XComponentContext>& context,
              const Reference<css::sheet::XSpreadsheetDocument>& document, const ChartPlace& place)
      : context_(context), document_(document), place_(place) {}

  void write() {
    insert();
    document2_->lockControllers();
    try {
      if (place_.chart.intervals)
        points_with_intervals();
      else
        bars_with_marks();
      axes();
      titles();
      backgrounds();
    } catch (...) {
      document2_->unlockControllers();
      throw;
    }
    document2_->unlockControllers();
  }

 private:
  Reference<css::uno::XInterface> make(const char* service) const {
    return context_->getServiceManager()->createInstanceWithContext(OUString::createFromAscii(service),
                                                                    context_);
  }

  Reference<css::sheet::XSpreadsheet> sheet(const OUString& name) const {
    return Reference<css::sheet::XSpreadsheet>(document_->getSheets()->getByName(name), UNO_QUERY_THROW);
  }

  Reference<css::table::XCellRange> numbers(std::size_t column, std::size_t columns = 1) const {
    const auto first = static_cast<sal_Int32>(place_.chart.first_data_row);
    return sheet(place_.data_sheet)
        ->getCellRangeByPosition(static_cast<sal_Int32>(column), first,
                                 static_cast<sal_Int32>(column + columns - 1),
                                 first + static_cast<sal_Int32>(place_.chart.points) - 1);
  }

  Reference<data::XDataSequence> sequence(const Reference<css::table::XCellRange>& range,
                                          const char* role) const {
    const Reference<data::XDataSequence> made =
        document2_->getDataProvider()->createDataSequenceByRangeRepresentation(
            get_property<OUString>(range, "AbsoluteName"));
    set_property(made, "Role", OUString::createFromAscii(role));
    return made;
  }

  Reference<data::XLabeledDataSequence> labelled(std::size_t column, const char* role,
                                                 bool with_label) const {
    const Reference<data::XLabeledDataSequence> made(make("com.sun.star.chart2.data.LabeledDataSequence"),
                                                     UNO_QUERY_THROW);
    made->setValues(sequence(numbers(column), role));
    if (with_label) {
      const auto row = static_cast<sal_Int32>(place_.chart.data_heading_row);
      const auto at = static_cast<sal_Int32>(column);
      made->setLabel(sequence(sheet(place_.data_sheet)->getCellRangeByPosition(at, row, at, row), "label"));
    }
    return made;
  }

  /// Names of charts are unique in a document, not only on a sheet.
  bool taken(const OUString& name) const {
    const Sequence<OUString> sheets = document_->getSheets()->getElementNames();
    for (sal_Int32 k = 0; k < sheets.getLength(); ++k) {
      const Reference<css::table::XTableChartsSupplier> supplier(sheet(sheets[k]), UNO_QUERY_THROW);
      if (supplier->getCharts()->hasByName(name)) return true;
    }
    return false;
  }

  void insert() {
    const Reference<css::table::XTableChartsSupplier> supplier(sheet(place_.sheet), UNO_QUERY_THROW);
    const Reference<css::table::XTableCharts> charts = supplier->getCharts();
    OUString name;
    for (sal_Int32 number = 1; name.isEmpty() || taken(name); ++number)
      name = (place_.chart.intervals ? OUString("Unply effects ") : OUString("Unply inflation ")) +
             OUString::number(number);
    Sequence<css::table::CellRangeAddress> ranges(1);
    ranges[0] =
        Reference<css::sheet::XCellRangeAddressable>(numbers(0, 2), UNO_QUERY_THROW)->getRangeAddress();
    charts->addNewByName(name, place_.rectangle, ranges, false, true);
    const Reference<css::document::XEmbeddedObjectSupplier> object(charts->getByName(name), UNO_QUERY_THROW);
    document1_.set(object->getEmbeddedObject(), UNO_QUERY_THROW);
    document2_.set(document1_, UNO_QUERY_THROW);
  }

  /// The one series that the chart begins with, in a diagram lying on its side, with the name that its
  /// heading gives.
  Reference<chart2::XDataSeries> lying_series(const char* diagram) {
    const Reference<css::lang::XMultiServiceFactory> factory(document1_, UNO_QUERY_THROW);
    document1_->setDiagram(Reference<css::chart::XDiagram>(
        factory->createInstance(OUString::createFromAscii(diagram)), UNO_QUERY_THROW));
    const Reference<chart2::XCoordinateSystemContainer> systems(document2_->getFirstDiagram(),
                                                                UNO_QUERY_THROW);
    system_ = systems->getCoordinateSystems()[0];
    set_property(system_, "SwapXAndYAxis", true);
    const Reference<chart2::XDataSeriesContainer> series(types()->getChartTypes()[0], UNO_QUERY_THROW);
    const Reference<chart2::XDataSeries> first = series->getDataSeries()[0];
    Sequence<Reference<data::XLabeledDataSequence>> sequences(1);
    sequences[0] = labelled(1, "values-y", true);
    Reference<data::XDataSink>(first, UNO_QUERY_THROW)->setData(sequences);
    return first;
  }

  Reference<chart2::XChartTypeContainer> types() const {
    return Reference<chart2::XChartTypeContainer>(system_, UNO_QUERY_THROW);
  }

  void points_with_intervals() {
    const Reference<chart2::XDataSeries> series = lying_series("com.sun.star.chart.LineDiagram");
    chart2::Symbol symbol;
    symbol.Style = chart2::SymbolStyle_STANDARD;
    symbol.StandardSymbol = 8;  // a circle
    const sal_Int32 size = std::min(point_size, sal_Int32(place_.chart.point_height / 2));
    symbol.Size = css::awt::Size(size, size);
    symbol.BorderColor = symbol.FillColor = colour::blue;
    set_property(series, "Symbol", symbol);
    set_property(series, "LineStyle", css::drawing::LineStyle_NONE);
    set_property(series, "Color", colour::blue);
    const Reference<css::beans::XPropertySet> bars(make("com.sun.star.chart2.ErrorBar"), UNO_QUERY_THROW);
    set_property(bars, "ErrorBarStyle", css::chart::ErrorBarStyle::FROM_DATA);
    set_property(bars, "ShowPositiveError", true);
    set_property(bars, "ShowNegativeError", true);
    set_property(bars, "LineColor", colour::blue);
    set_property(bars, "LineWidth", interval_line);
    Sequence<Reference<data::XLabeledDataSequence>> lengths(2);
    lengths[0] = labelled(4, "error-bars-y-negative", true);
    lengths[1] = labelled(5, "error-bars-y-positive", true);
    Reference<data::XDataSink>(bars, UNO_QUERY_THROW)->setData(lengths);
    set_property(series, "ErrorBarY", bars);
    set_property(document1_, "HasLegend", false);
  }

  void bars_with_marks() {
    const Reference<chart2::XDataSeries> series = lying_series("com.sun.star.chart.BarDiagram");
    set_property(series, "Color", colour::sky_blue);
    set_property(series, "BorderStyle", css::drawing::LineStyle_NONE);
    const Reference<chart2::XChartType> lines(make("com.sun.star.chart2.LineChartType"), UNO_QUERY_THROW);
    types()->addChartType(lines);
    const Reference<chart2::XDataSeriesContainer> all(lines, UNO_QUERY_THROW);
    // Each mark has its own dashes and its own colour, and its name in the legend.
    constexpr std::array<sal_Int32, 3> inks = {colour::bluish_green, colour::reddish_purple,
                                               colour::vermillion};
    for (std::size_t k = 0; k < place_.chart.marks.size(); ++k) {
      const Reference<chart2::XDataSeries> mark(make("com.sun.star.chart2.DataSeries"), UNO_QUERY_THROW);
      Sequence<Reference<data::XLabeledDataSequence>> sequences(1);
      sequences[0] = labelled(2 + k, "values-y", true);
      Reference<data::XDataSink>(mark, UNO_QUERY_THROW)->setData(sequences);
      const sal_Int32 ink = inks[k % inks.size()];
      chart2::Symbol none;
      none.Style = chart2::SymbolStyle_NONE;
      set_property(mark, "Symbol", none);
      set_property(mark, "Color", ink);
      set_property(mark, "LineWidth", mark_line);
      dashes(mark, k);
      all->addDataSeries(mark);
    }
    set_property(series, "ShowLegendEntry", false);  // the axis says what the bars are
    set_property(document1_, "HasLegend", true);
    const Reference<css::drawing::XShape> legend = document1_->getLegend();
    set_property(legend, "Alignment", css::chart::ChartLegendPosition_BOTTOM);
    set_property(legend, "CharHeight", label_points);
    set_property(legend, "LineStyle", css::drawing::LineStyle_NONE);
    set_property(legend, "FillStyle", css::drawing::FillStyle_NONE);
  }

  template <class Line>
  static void dashes(const Reference<Line>& line, std::size_t k) {
    if (k == 2) return;  // the highest mark is a full line
    css::drawing::LineDash dash;
    dash.Style = css::drawing::DashStyle_RECT;
    dash.Dashes = 1;
    dash.DashLen = k == 0 ? 80 : 250;
    dash.Distance = 100;
    set_property(line, "LineStyle", css::drawing::LineStyle_DASH);
    set_property(line, "LineDash", dash);
  }

  void axes() {
    // Names from top to bottom, in the order of the tables; the axis of the numbers below.
    const Reference<chart2::XAxis> names = system_->getAxisByDimension(0, 0);
    chart2::ScaleData scale = names->getScaleData();
    scale.Orientation = chart2::AxisOrientation_REVERSE;
    scale.ShiftedCategoryPosition = true;
    if (!scale.Categories.is()) scale.Categories = labelled(0, "categories", false);
    names->setScaleData(scale);

    const Reference<css::beans::XPropertySet> name_axis =
        Reference<css::chart::XAxisXSupplier>(document1_->getDiagram(), UNO_QUERY_THROW)->getXAxis();
    const Reference<css::chart::XAxisYSupplier> y(document1_->getDiagram(), UNO_QUERY_THROW);
    const Reference<css::beans::XPropertySet> number_axis = y->getYAxis();
    set_property(number_axis, "Logarithmic", place_.chart.logarithmic);
    set_property(number_axis, "Min", place_.chart.axis_minimum);
    set_property(number_axis, "Max", place_.chart.axis_maximum);
    if (!place_.chart.logarithmic) set_property(number_axis, "StepMain", place_.chart.axis_step);
    set_property(number_axis, "CrossoverPosition", css::chart::ChartAxisPosition_END);
    set_property(number_axis, "LabelPosition", css::chart::ChartAxisLabelPosition_NEAR_AXIS);
    if (!place_.chart.intervals) set_property(number_axis, "GapWidth", bar_gap);
    set_property(number_axis, "LinkNumberFormatToSource", false);
    set_property(number_axis, "CharHeight", label_points);
    set_property(number_axis, "LineColor", colour::grey);

    // The line of the names stands at zero (at one for factors); the names themselves stay at the edge.
    set_property(name_axis, "CrossoverPosition", css::chart::ChartAxisPosition_VALUE);
    set_property(name_axis, "CrossoverValue", place_.chart.logarithmic ? 1.0 : 0.0);
    set_property(name_axis, "LabelPosition", css::chart::ChartAxisLabelPosition_OUTSIDE_START);
    set_property(name_axis, "CharHeight", place_.chart.point_height < roomy ? dense_points : label_points);
    set_property(name_axis, "TextBreak", true);
    set_property(name_axis, "TextOverlap", true);  // every name is shown
    set_property(name_axis, "LineColor", colour::dark_grey);
    set_property(name_axis, "LineWidth", mark_line);
    set_property(name_axis, "Marks", sal_Int32(0));

    set_property(document1_->getDiagram(), "HasYAxisGrid", true);
    const Reference<css::beans::XPropertySet> grid = y->getYMainGrid();
    set_property(grid, "LineColor", colour::light_grey);
  }

  void titles() {
    set_property(document1_, "HasMainTitle", true);
    const Reference<css::drawing::XShape> title = document1_->getTitle();
    set_property(title, "String", to_office(place_.chart.title));
    set_property(title, "CharHeight", title_points);
    set_property(title, "CharWeight", css::awt::FontWeight::BOLD);
    const Reference<css::chart::XAxisYSupplier> y(document1_->getDiagram(), UNO_QUERY_THROW);
    set_property(document1_->getDiagram(), "HasYAxisTitle", true);
    set_property(y->getYAxisTitle(), "String", to_office(place_.chart.axis_title));
    set_property(y->getYAxisTitle(), "CharHeight", label_points);
    set_property(y->getYAxisTitle(), "TextRotation", sal_Int32(0));
  }

  void backgrounds() {
    const Reference<css::beans::XPropertySet> area = document1_->getArea();
    set_property(area, "FillStyle", css::drawing::FillStyle_SOLID);
    set_property(area, "FillColor", colour::white);
    set_property(area, "LineStyle", css::drawing::LineStyle_NONE);
    const Reference<css::beans::XPropertySet> wall = document2_->getFirstDiagram()->getWall();
    set_property(wall, "FillStyle", css::drawing::FillStyle_NONE);
    set_property(wall, "LineStyle", css::drawing::LineStyle_NONE);
  }

  Reference<css::uno::XComponentContext> context_;
  Reference<css::sheet::XSpreadsheetDocument> document_;
  const ChartPlace& place_;
  Reference<css::chart::XChartDocument> document1_;
  Reference<chart2::XChartDocument> document2_;
  Reference<chart2::XCoordinateSystem> system_;
};

}  // namespace

void write_chart(const Reference<css::uno::XComponentContext>& context,
                 const Reference<css::sheet::XSpreadsheetDocument>& document, const ChartPlace& place) {
  ChartWriter(context, document, place).write();
}

}  // namespace unply::office
