// wend/lab/json.hpp - writes JSON (RFC 8259): for other programs, and inside a page.
#pragma once

#include <array>
#include <charconv>
#include <cmath>
#include <cstdint>
#include <cstdio>
#include <string>
#include <string_view>
#include <type_traits>

#include "wend/lab/utf8.hpp"

namespace wend::inline v0::lab {

/// A text in the making. Members and elements are separated as needed; that what is opened is closed, and that only
/// objects have keys, is the caller's part. Text may be any bytes: what is not valid UTF-8 becomes U+FFFD, and '<', '>'
/// and '&' are written as escapes, so that the result may stand inside a script element of a page.
class JsonText {
 public:
  /// Opens an object.
  JsonText& object() { return open('{'); }
  /// Closes it.
  JsonText& end_object() { return close('}'); }
  /// Opens an array.
  JsonText& array() { return open('['); }
  /// Closes it.
  JsonText& end_array() { return close(']'); }

  /// The name of the member that follows.
  JsonText& key(std::string_view name) {
    separate();
    quote(name);
    text_ += ':';
    fresh_ = true;
    return *this;
  }

  /// A text as a value, quoted.
  JsonText& value(std::string_view text) {
    separate();
    quote(text);
    return *this;
  }
  /// A text that ends with a zero byte.
  JsonText& value(char const* text) { return value(std::string_view(text)); }
  /// true or false.
  JsonText& value(bool yes) { return raw(yes ? "true" : "false"); }
  /// A whole number.
  template <typename T>
    requires(std::is_integral_v<T> && !std::is_same_v<T, bool>)
  JsonText& value(T number) {
    return raw(std::to_string(number));
  }
  /// With as many digits as give the same number back; what is not finite is null.
  JsonText& value(double number) {
    std::array<char, 40> digits{};
    auto const end = std::to_chars(digits.data(), digits.data() + digits.size(), number).ptr;
    return raw(std::isfinite(number) ? std::string_view(digits.data(), end) : "null");
  }
  /// With no more than so many decimals, and no zeros at the end; what is not finite is null.
  JsonText& value(double number, int decimals) {
    std::array<char, 340> digits{};
    auto end =
        std::to_chars(digits.data(), digits.data() + digits.size(), number, std::chars_format::fixed, decimals).ptr;
    std::string_view shown(digits.data(), end);
    while (shown.find('.') != shown.npos && (shown.back() == '0' || shown.back() == '.')) {
      bool const whole = shown.back() == '.';
      shown.remove_suffix(1);
      if (whole) {
        break;
      }
    }
    return raw(std::isfinite(number) ? (shown == "-0" ? "0" : shown) : "null");
  }

  /// A member at once.
  template <typename T>
  JsonText& member(std::string_view name, T const& of) {
    return key(name).value(of);
  }

  /// What was written so far.
  [[nodiscard]] std::string const& text() const noexcept { return text_; }

 private:
  JsonText& open(char bracket) {
    separate();
    text_ += bracket;
    fresh_ = true;
    return *this;
  }
  JsonText& close(char bracket) {
    text_ += bracket;
    fresh_ = false;
    return *this;
  }
  JsonText& raw(std::string_view written) {
    separate();
    text_ += written;
    return *this;
  }
  void separate() {
    if (!fresh_) {
      text_ += ',';
    }
    fresh_ = false;
  }

  void quote(std::string_view text) {
    text_ += '"';
    while (!text.empty()) {
      std::size_t const size = detail::utf8_size(text);
      unsigned const c = static_cast<unsigned char>(text.front());
      if (size == 0) {
        text_ += "\\ufffd";
      } else if (size > 1) {
        text_ += text.substr(0, size);
      } else if (c == '"' || c == '\\') {
        text_ += '\\';
        text_ += text.front();
      } else if (c < 0x20 || c == '<' || c == '>' || c == '&' || c == 0x7F) {
        std::array<char, 8> escape{};
        std::snprintf(escape.data(), escape.size(), "\\u%04x", c);
        text_ += escape.data();
      } else {
        text_ += text.front();
      }
      text.remove_prefix(size == 0 ? 1 : size);
    }
    text_ += '"';
  }

  std::string text_;
  bool fresh_ = true;
};

}  // namespace wend::inline v0::lab
