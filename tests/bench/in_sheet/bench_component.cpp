// Inside the office: fills a sheet, and reads it without keeping anything: the floor that the sheet functions are
// measured against.
#include <sal/config.h>

#include <algorithm>
#include <com/sun/star/lang/XServiceInfo.hpp>
#include <com/sun/star/sheet/XCellRangeAddressable.hpp>
#include <com/sun/star/sheet/XCellRangeData.hpp>
#include <com/sun/star/uno/XComponentContext.hpp>
#include <cppuhelper/implbase2.hxx>
#include <cppuhelper/supportsservice.hxx>
#include <unplybench/XBench.hpp>

#include "core/base/random.hpp"

namespace {

using com::sun::star::sheet::XCellRangeAddressable;
using com::sun::star::sheet::XCellRangeData;
using com::sun::star::table::CellRangeAddress;
using com::sun::star::table::XCellRange;
using com::sun::star::uno::Any;
using com::sun::star::uno::Reference;
using com::sun::star::uno::Sequence;
using com::sun::star::uno::UNO_QUERY_THROW;
using rtl::OUString;
using Range = const Reference<XCellRange>&;
using AnyCells = Sequence<Sequence<Any>>;

constexpr sal_Int32 cells_a_block = 10000;

struct Size {
  sal_Int32 rows, columns;
};

Size size_of(Range range) {
  const CellRangeAddress at = Reference<XCellRangeAddressable>(range, UNO_QUERY_THROW)->getRangeAddress();
  return {at.EndRow - at.StartRow + 1, at.EndColumn - at.StartColumn + 1};
}

/// work(block, first row, rows) for blocks of whole rows.
template <class Work>
void for_each_block(Range range, Work work) {
  const Size size = size_of(range);
  const sal_Int32 block = std::max(sal_Int32(1), cells_a_block / size.columns);
  for (sal_Int32 first = 0; first < size.rows; first += block) {
    const sal_Int32 count = std::min(block, size.rows - first);
    const Reference<XCellRangeData> cells(
        range->getCellRangeByPosition(0, first, size.columns - 1, first + count - 1), UNO_QUERY_THROW);
    work(cells, first, count);
  }
}

double sum_of(Range range) {
  double sum = 0;
  for_each_block(range, [&sum](const Reference<XCellRangeData>& block, sal_Int32, sal_Int32) {
    const AnyCells rows = block->getDataArray();
    for (sal_Int32 i = 0; i < rows.getLength(); ++i)
      for (sal_Int32 j = 0; j < rows[i].getLength(); ++j) {
        double number = 0;
        if (rows[i][j] >>= number) sum += number;
      }
  });
  return sum;
}

class Bench : public cppu::WeakImplHelper2<unplybench::XBench, com::sun::star::lang::XServiceInfo> {
 public:
  double SAL_CALL READ(Range response, Range predictors) override { return sum_of(response) + sum_of(predictors); }

  void SAL_CALL fill(Range range, sal_Int64 seed) override {
    const sal_Int32 columns = size_of(range).columns;
    unply::Random random(static_cast<std::uint64_t>(seed));
    for_each_block(range, [&](const Reference<XCellRangeData>& block, sal_Int32 first, sal_Int32 count) {
      AnyCells rows(count);
      for (sal_Int32 i = 0; i < count; ++i) {
        rows[i].realloc(columns);
        Any* row = rows[i].getArray();
        if (first + i == 0) {
          row[0] <<= OUString("y");
          for (sal_Int32 j = 1; j < columns; ++j) row[j] <<= OUString("x") + OUString::number(j);
          continue;
        }
        const double common = random.normal();
        double response = random.normal();
        for (sal_Int32 j = 1; j < columns; ++j) {
          const double x = 10 * j + common + random.normal();
          response += 0.01 * x;
          row[j] <<= x;
        }
        row[0] <<= response;
      }
      block->setDataArray(rows);
    });
  }

  OUString SAL_CALL getImplementationName() override { return "unplybench.Bench"; }
  sal_Bool SAL_CALL supportsService(const OUString& name) override { return cppu::supportsService(this, name); }
  Sequence<OUString> SAL_CALL getSupportedServiceNames() override {
    Sequence<OUString> names(1);
    names[0] = "UNPLYBENCH";
    return names;
  }
};

}  // namespace

extern "C" SAL_DLLPUBLIC_EXPORT com::sun::star::uno::XInterface* unplybench_bench(
    com::sun::star::uno::XComponentContext*, const com::sun::star::uno::Sequence<com::sun::star::uno::Any>&) {
  return cppu::acquire(new Bench);
}
