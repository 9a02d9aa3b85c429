// Small help for talking to the office: short names, properties.
#pragma once

#include <sal/config.h>

#include <com/sun/star/beans/UnknownPropertyException.hpp>
#include <com/sun/star/beans/XPropertySet.hpp>
#include <com/sun/star/uno/Any.hxx>
#include <com/sun/star/uno/Reference.hxx>
#include <rtl/ustring.hxx>

#include "extension/cells/strings.hpp"

namespace unply::office {

namespace css = com::sun::star;
using css::uno::Any;
using css::uno::Reference;
using css::uno::Sequence;
using css::uno::UNO_QUERY;
using css::uno::UNO_QUERY_THROW;
using rtl::OUString;

/// Sets one property of an object of the office. An unknown one is a mistake of ours: the exception names it.
template <class Value, class Interface>
void set_property(const Reference<Interface>& object, const char* name, const Value& value) {
  const Reference<css::beans::XPropertySet> properties(object, UNO_QUERY_THROW);
  const OUString property = OUString::createFromAscii(name);
  try {
    properties->setPropertyValue(property, css::uno::makeAny(value));
  } catch (const css::beans::UnknownPropertyException&) {
    throw css::beans::UnknownPropertyException(property, object);
  }
}

template <class Value, class Interface>
Value get_property(const Reference<Interface>& object, const char* name) {
  const Reference<css::beans::XPropertySet> properties(object, UNO_QUERY_THROW);
  Value value{};
  properties->getPropertyValue(OUString::createFromAscii(name)) >>= value;
  return value;
}

}  // namespace unply::office
