// wend/lab/utf8.hpp - is a text UTF-8? Whatever comes from a file may be anything.
#pragma once

#include <cstddef>
#include <string_view>

namespace wend::inline v0::lab::detail {

// Bytes of the first character, from 1 to 4; 0 where they are none (RFC 3629, section 4): a byte that cannot begin one,
// an overlong form, a surrogate, something over U+10FFFF, or the text ends within it.
[[nodiscard]] inline std::size_t utf8_size(std::string_view text) {
  auto const at = [&text](std::size_t i) { return i < text.size() ? static_cast<unsigned char>(text[i]) : 0U; };
  auto const follows = [&at](std::size_t i, unsigned low = 0x80, unsigned high = 0xBF) {
    return at(i) >= low && at(i) <= high;
  };
  unsigned const lead = at(0);
  if (lead < 0x80) {
    return text.empty() ? 0 : 1;
  }
  if (lead >= 0xC2 && lead <= 0xDF) {
    return follows(1) ? 2 : 0;
  }
  if (lead >= 0xE0 && lead <= 0xEF) {
    return follows(1, lead == 0xE0 ? 0xA0 : 0x80, lead == 0xED ? 0x9F : 0xBF) && follows(2) ? 3 : 0;
  }
  if (lead >= 0xF0 && lead <= 0xF4) {
    return follows(1, lead == 0xF0 ? 0x90 : 0x80, lead == 0xF4 ? 0x8F : 0xBF) && follows(2) && follows(3) ? 4 : 0;
  }
  return 0;
}

[[nodiscard]] inline bool is_utf8(std::string_view text) {
  while (!text.empty()) {
    std::size_t const size = utf8_size(text);
    if (size == 0) {
      return false;
    }
    text.remove_prefix(size);
  }
  return true;
}

}  // namespace wend::inline v0::lab::detail
