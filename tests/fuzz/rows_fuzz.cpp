// Any text as a file of a campaign's rows: read whole, or refused with the place; what is read is written the same
// again.
#include <cstddef>
#include <cstdint>
#include <string>

#include "target.hpp"
#include "wend/lab/csv.hpp"
#include "wend/lab/row_file.hpp"

extern "C" int LLVMFuzzerTestOneInput(std::uint8_t const* data, std::size_t size) {
  std::string text(size, '\0');
  for (std::size_t i = 0; i < size; ++i) {
    text[i] = static_cast<char>(data[i]);
  }
  try {
    auto const file = wend::lab::parse_rows("f", text);
    fuzz::hold(wend::lab::text_of(file) == text, "what was read is written the same");
  } catch (wend::lab::FileError const& error) {
    std::string const what = error.what();
    fuzz::hold(what.rfind("f", 0) == 0 && what.size() > 2, "a refusal says where and why");
  }
  return 0;
}
