// Any text put into markup: nothing in it can end an element, open one, or leave an attribute.
#include <cstddef>
#include <cstdint>
#include <string>

#include "target.hpp"
#include "wend/lab/svg.hpp"

extern "C" int LLVMFuzzerTestOneInput(std::uint8_t const* data, std::size_t size) {
  std::string text(size, '\0');
  for (std::size_t i = 0; i < size; ++i) {
    text[i] = static_cast<char>(data[i]);
  }
  std::string const safe = wend::lab::escaped(text);
  fuzz::hold(safe.find_first_of("<>\"'") == safe.npos, "no character that markup heeds");
  for (std::size_t at = safe.find('&'); at != safe.npos; at = safe.find('&', at + 1)) {
    std::size_t const end = safe.find(';', at);
    fuzz::hold(end != safe.npos && end - at <= 6, "each ampersand begins a reference");
  }
  for (char const c : safe) {
    auto const byte = static_cast<unsigned char>(c);
    fuzz::hold(byte >= 0x20U || c == '\t' || c == '\n' || c == '\r', "no control character, which XML forbids");
  }
  return 0;
}
