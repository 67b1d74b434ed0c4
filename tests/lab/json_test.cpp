// JSON against RFC 8259 (2017), sections 2 to 7, and UTF-8 against table 3-7 of the Unicode standard, from memory. A
// general-purpose parser reads the JSON of the examples in tests/examples.
#include <cstdint>
#include <cstdlib>
#include <limits>
#include <string>

#include <doctest/doctest.h>

#include "wend/lab/json.hpp"

namespace {

using wend::lab::JsonText;

std::string quoted(std::string const& text) { return JsonText().value(text).text(); }

}  // namespace

TEST_CASE("values are separated where RFC 8259 wants it, and nowhere else") {
  JsonText json;
  json.object().member("a", 1).key("b").array().value(2).value("x").array().end_array().value(true).end_array();
  json.member("c", false).key("d").object().end_object().end_object();
  CHECK(json.text() == R"({"a":1,"b":[2,"x",[],true],"c":false,"d":{}})");
}

TEST_CASE("numbers come back as they were, whatever they are") {
  for (double const x : {0.1, 1.0 / 3.0, 1e-308, 4.9e-324, 1.7976931348623157e308, -2.5, 1e21, 123456789.125}) {
    CHECK(std::strtod(JsonText().value(x).text().c_str(), nullptr) == x);
  }
  CHECK(JsonText().value(std::uint64_t{18446744073709551615U}).text() == "18446744073709551615");
  CHECK(JsonText().value(-7).text() == "-7");
}

TEST_CASE("what RFC 8259 has no number for is null") {
  CHECK(JsonText().value(std::numeric_limits<double>::infinity()).text() == "null");
  CHECK(JsonText().value(std::numeric_limits<double>::quiet_NaN()).text() == "null");
  CHECK(JsonText().value(-std::numeric_limits<double>::infinity(), 3).text() == "null");
}

TEST_CASE("a number with a few decimals loses zeros that say nothing, and a sign that is none") {
  CHECK(JsonText().value(1.5, 3).text() == "1.5");
  CHECK(JsonText().value(100.0, 2).text() == "100");
  CHECK(JsonText().value(100.0, 0).text() == "100");
  CHECK(JsonText().value(0.126, 2).text() == "0.13");
  CHECK(JsonText().value(-0.0001, 2).text() == "0");
  CHECK(std::strtod(JsonText().value(1e300, 2).text().c_str(), nullptr) == 1e300);
}

TEST_CASE("text is escaped as RFC 8259 says, and so that it can close no element of a page") {
  CHECK(quoted("a\"b\\c") == R"("a\"b\\c")");
  CHECK(quoted(std::string("\0\n\x1f", 3)) == R"("\u0000\u000a\u001f")");
  CHECK(quoted("</script><!--&") == R"("\u003c/script\u003e\u003c!--\u0026")");
  CHECK(quoted("\xc3\xa9 \xe2\x82\xac \xf0\x9f\x8c\xb1") == "\"\xc3\xa9 \xe2\x82\xac \xf0\x9f\x8c\xb1\"");
}

TEST_CASE("bytes that are no UTF-8 become U+FFFD, one for each") {
  CHECK(quoted("\xff"
               "a") == R"("\ufffda")");
  CHECK(quoted("\xc3") == R"("\ufffd")");               // ends early
  CHECK(quoted("\xc0\xaf") == R"("\ufffd\ufffd")");     // longer than need be
  CHECK(quoted("\xed\xa0\x80") == R"("\ufffd\ufffd\ufffd")");      // a surrogate
  CHECK(quoted("\xf4\x90\x80\x80") == R"("\ufffd\ufffd\ufffd\ufffd")");  // beyond U+10FFFF
  CHECK(quoted("\xe2\x82") == R"("\ufffd\ufffd")");
}
