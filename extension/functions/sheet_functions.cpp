// The sheet functions.
#include <sal/config.h>

#include <com/sun/star/lang/XServiceInfo.hpp>
#include <com/sun/star/sheet/XCellRangeAddressable.hpp>
#include <com/sun/star/sheet/XCellRangeData.hpp>
#include <com/sun/star/uno/XComponentContext.hpp>
#include <cppuhelper/implbase3.hxx>
#include <cppuhelper/supportsservice.hxx>
#include <unply/XActivity.hpp>
#include <unply/XSheetFunctions.hpp>

namespace unply::office {
namespace {

using com::sun::star::table::XCellRange;
using com::sun::star::uno::Any;
using com::sun::star::uno::Reference;
using com::sun::star::uno::Sequence;
using rtl::OUString;
using AnyBlock = Sequence<Sequence<Any>>;
using Range = const Reference<XCellRange>&;

class SheetFunctions : public cppu::WeakImplHelper3<unply::XSheetFunctions, unply::XActivity,
                                                    com::sun::star::lang::XServiceInfo> {
 public:
  AnyBlock SAL_CALL VIF(Range predictors, const Any&) override { return shape(predictors); }
  AnyBlock SAL_CALL CONDITION(Range predictors, const Any&) override { return shape(predictors); }
  AnyBlock SAL_CALL DEPENDENCIES(Range predictors, const Any&) override { return shape(predictors); }
  AnyBlock SAL_CALL ESTIMATES(Range, Range predictors, const Any&) override { return shape(predictors); }
  AnyBlock SAL_CALL FITQUALITY(Range, Range predictors, const Any&) override { return shape(predictors); }
  AnyBlock SAL_CALL LEDGER(Range, Range predictors, const Any&) override { return shape(predictors); }
  AnyBlock SAL_CALL GROUPS(Range, Range predictors, const Any&) override { return shape(predictors); }
  AnyBlock SAL_CALL PREDICT(Range, Range predictors, Range, const Any&) override { return shape(predictors); }
  AnyBlock SAL_CALL ROWSNEEDED(Range, Range predictors, const Any&) override { return shape(predictors); }
  AnyBlock SAL_CALL FROMCORRELATIONS(Range correlations, double, const Any&) override {
    return shape(correlations);
  }

  sal_Int64 SAL_CALL getTablesRead() override { return 0; }
  sal_Int64 SAL_CALL getAnalysesBegun() override { return 0; }

  OUString SAL_CALL getImplementationName() override { return "unply.SheetFunctions"; }
  sal_Bool SAL_CALL supportsService(const OUString& name) override {
    return cppu::supportsService(this, name);
  }
  Sequence<OUString> SAL_CALL getSupportedServiceNames() override {
    Sequence<OUString> names(1);
    names[0] = "UNPLY";
    return names;
  }

 private:
  static AnyBlock shape(Range range) {
    Reference<com::sun::star::sheet::XCellRangeData> data(range, com::sun::star::uno::UNO_QUERY_THROW);
    const AnyBlock cells = data->getDataArray();
    AnyBlock out(2);
    out[0] = Sequence<Any>(2);
    out[1] = Sequence<Any>(2);
    out[0][0] <<= OUString("rows");
    out[0][1] <<= OUString("columns");
    out[1][0] <<= double(cells.getLength());
    out[1][1] <<= double(cells[0].getLength());
    return out;
  }
};

}  // namespace
}  // namespace unply::office

extern "C" SAL_DLLPUBLIC_EXPORT com::sun::star::uno::XInterface* unply_sheet_functions(
    com::sun::star::uno::XComponentContext*, const com::sun::star::uno::Sequence<com::sun::star::uno::Any>&) {
  return cppu::acquire(new unply::office::SheetFunctions);
}
