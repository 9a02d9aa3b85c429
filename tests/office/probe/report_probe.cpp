// A job for tests: writes a made-up report into a document. Arguments: `document`, `shape`. Gives the sheets'
// names.
#include <sal/config.h>

#include <com/sun/star/beans/NamedValue.hpp>
#include <com/sun/star/lang/IllegalArgumentException.hpp>
#include <com/sun/star/lang/XServiceInfo.hpp>
#include <com/sun/star/task/XJob.hpp>
#include <com/sun/star/uno/XComponentContext.hpp>
#include <cppuhelper/implbase2.hxx>
#include <cppuhelper/supportsservice.hxx>

#include "extension/charts/chart_writer.hpp"
#include "tests/support/made_reports.hpp"

namespace {

using namespace unply::office;

class ReportProbe : public cppu::WeakImplHelper2<css::task::XJob, css::lang::XServiceInfo> {
 public:
  explicit ReportProbe(const Reference<css::uno::XComponentContext>& context) : context_(context) {}

  Any SAL_CALL execute(const Sequence<css::beans::NamedValue>& arguments) override {
    Reference<css::sheet::XSpreadsheetDocument> document;
    OUString shape;
    for (sal_Int32 k = 0; k < arguments.getLength(); ++k) {
      if (arguments[k].Name == "document") arguments[k].Value >>= document;
      if (arguments[k].Name == "shape") arguments[k].Value >>= shape;
    }
    try {
      const WrittenSheets written = write_sheets(document, unply::test::made_report(to_utf8(shape)));
      for (const ChartPlace& place : written.charts) write_chart(context_, document, place);
      Sequence<OUString> names(static_cast<sal_Int32>(written.names.size()));
      for (std::size_t k = 0; k < written.names.size(); ++k)
        names[static_cast<sal_Int32>(k)] = written.names[k];
      return css::uno::makeAny(names);
    } catch (const unply::Error& error) {
      throw css::lang::IllegalArgumentException(to_office(unply::text::sentence(error)), *this, 0);
    } catch (const std::exception& error) {
      throw css::uno::RuntimeException(to_office(error.what()), *this);
    }
  }

  OUString SAL_CALL getImplementationName() override { return "unply.test.ReportProbe"; }
  sal_Bool SAL_CALL supportsService(const OUString& name) override {
    return cppu::supportsService(this, name);
  }
  Sequence<OUString> SAL_CALL getSupportedServiceNames() override {
    Sequence<OUString> names(1);
    names[0] = getImplementationName();
    return names;
  }

 private:
  Reference<css::uno::XComponentContext> context_;
};

}  // namespace

extern "C" SAL_DLLPUBLIC_EXPORT css::uno::XInterface* unply_report_probe(
    css::uno::XComponentContext* context, const css::uno::Sequence<css::uno::Any>&) {
  return cppu::acquire(new ReportProbe(context));
}
