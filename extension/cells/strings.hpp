// Text of the office (UTF-16) and ours (UTF-8).
#pragma once

#include <rtl/string.hxx>
#include <rtl/ustring.hxx>
#include <string>

namespace unply::office {

inline std::string to_utf8(const rtl::OUString& text) {
  const rtl::OString bytes = rtl::OUStringToOString(text, RTL_TEXTENCODING_UTF8);
  return std::string(bytes.getStr(), static_cast<std::size_t>(bytes.getLength()));
}

inline rtl::OUString to_office(const std::string& text) {
  return rtl::OUString(text.data(), static_cast<sal_Int32>(text.size()), RTL_TEXTENCODING_UTF8);
}

}  // namespace unply::office
