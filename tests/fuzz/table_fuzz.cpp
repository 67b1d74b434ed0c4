// Any text as a table: read whole or refused with a place in it.
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <string>

#include "target.hpp"
#include "wend/lab/csv.hpp"

extern "C" int LLVMFuzzerTestOneInput(std::uint8_t const* data, std::size_t size) {
  std::string text(size, '\0');
  for (std::size_t i = 0; i < size; ++i) {
    text[i] = static_cast<char>(data[i]);
  }
  try {
    auto const table = wend::lab::parse_table("f", text, [](std::string const& name) { return name != "x"; });
    fuzz::hold(!table.names.empty(), "a table has columns");
    fuzz::hold(table.rows.size() == table.lines.size() && table.rows.size() == table.columns.size(),
               "each row knows its line");
    for (auto const& row : table.rows) {
      fuzz::hold(row.size() == table.names.size(), "each row has a cell a column");
      for (double const cell : row) {
        fuzz::hold(!std::isinf(cell), "a cell is a number, or empty");
      }
    }
  } catch (wend::lab::FileError const& error) {
    std::string const what = error.what();
    fuzz::hold(what.rfind("f:", 0) == 0 && what.find("expected") != what.npos, "an error says where and what");
  }
  return 0;
}
