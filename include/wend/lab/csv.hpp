// wend/lab/csv.hpp - tables of numbers in and out: strict, with errors that say where.
#pragma once

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>
#include <cstddef>
#include <cstdio>
#include <fstream>
#include <limits>
#include <stdexcept>
#include <string>
#include <string_view>
#include <vector>

namespace wend::inline v0::lab {

/// What is wrong with a file, and where: "stems.csv:3:7: expected a number, found 'x'". Line and column count from 1,
/// the column in characters.
class FileError : public std::runtime_error {
 public:
  /// "file:line:column: what".
  FileError(std::string const& file, std::size_t line, std::size_t column, std::string const& what)
      : std::runtime_error(file + ":" + std::to_string(line) + ":" + std::to_string(column) + ": " + what) {}
  /// "file: what", where no place in it is to blame.
  FileError(std::string const& file, std::string const& what) : std::runtime_error(file + ": " + what) {}
};

/// A table of numbers under a line of names, no two alike. An empty cell is not-a-number.
struct Table {
  std::string file;  ///< its name, for messages
  std::vector<std::string> names;  ///< of the columns
  std::vector<std::vector<double>> rows;  ///< one a line, as wide as `names`
  std::vector<std::size_t> lines;  ///< of the file, one a row, from 1
  std::vector<std::vector<std::size_t>> columns{};  ///< where each cell of each row begins in its line, from 1
  std::size_t names_line = 1;                       ///< the line of the names

  /// The number of the column with a name; throws FileError when there is none.
  [[nodiscard]] std::size_t column(std::string_view name) const {
    for (std::size_t i = 0; i < names.size(); ++i) {
      if (names[i] == name) {
        return i;
      }
    }
    throw FileError(file, names_line, 1, "expected a column named '" + std::string(name) + "'");
  }

  /// What is wrong with a cell, to be thrown.
  [[nodiscard]] FileError error(std::size_t row, std::size_t column, std::string const& what) const {
    return {file, lines[row], columns[row][column], what};
  }
};

namespace detail {

struct Cell {
  std::string_view text;
  std::size_t column;
};

// Characters of UTF-8: bytes that do not go on with one.
inline std::size_t characters(std::string_view text) {
  return static_cast<std::size_t>(
      std::count_if(text.begin(), text.end(), [](char c) { return (static_cast<unsigned char>(c) & 0xC0U) != 0x80U; }));
}

inline std::vector<Cell> split(std::string_view line) {
  std::vector<Cell> cells;
  std::size_t start = 0;
  std::size_t before = 0;  // characters to the left of this cell
  while (true) {
    std::size_t const comma = line.find(',', start);
    std::string_view text = line.substr(start, comma == line.npos ? line.npos : comma - start);
    std::size_t const size = characters(text);
    std::size_t lead = text.find_first_not_of(" \t");
    lead = lead == text.npos ? text.size() : lead;
    text.remove_prefix(lead);
    text = text.substr(0, text.find_last_not_of(" \t") + 1);
    cells.push_back({text, before + lead + 1});
    if (comma == line.npos) {
      return cells;
    }
    start = comma + 1;
    before += size + 1;
  }
}

inline bool is_number(std::string_view text, double& value) {
  auto const [end, error] = std::from_chars(text.data(), text.data() + text.size(), value);
  return error == std::errc{} && end == text.data() + text.size() && std::isfinite(value);
}

}  // namespace detail

/// Reads comma-separated numbers under one line of names. Every row has as many cells as there are names; a cell is a
/// finite number, or empty where `may_be_empty` says so of its column. Lines may end in CR LF; empty lines are passed
/// over. Throws FileError.
template <typename MayBeEmpty>
[[nodiscard]] Table parse_table(std::string const& file, std::string_view content, MayBeEmpty const& may_be_empty) {
  Table table{file, {}, {}, {}};
  if (content.substr(0, 3) == "\xEF\xBB\xBF") {  // a byte order mark, as spreadsheets leave it
    content.remove_prefix(3);
  }
  std::size_t number = 0;
  while (!content.empty()) {
    ++number;
    std::size_t const end = content.find('\n');
    std::string_view line = content.substr(0, end);
    content.remove_prefix(end == content.npos ? content.size() : end + 1);
    if (!line.empty() && line.back() == '\r') {
      line.remove_suffix(1);
    }
    if (line.find_first_not_of(" \t") == line.npos) {
      continue;
    }
    auto const cells = detail::split(line);
    double value = 0.0;
    if (table.names.empty()) {
      for (auto const& cell : cells) {
        if (cell.text.empty() || detail::is_number(cell.text, value)) {
          throw FileError(file, number, cell.column, "expected a column name, found '" + std::string(cell.text) + "'");
        }
        if (std::find(table.names.begin(), table.names.end(), cell.text) != table.names.end()) {
          throw FileError(file, number, cell.column,
                          "expected another column name, found '" + std::string(cell.text) + "' again");
        }
        table.names.emplace_back(cell.text);
      }
      table.names_line = number;
      continue;
    }
    if (cells.size() != table.names.size()) {
      throw FileError(
          file, number, cells[std::min(table.names.size(), cells.size() - 1)].column,
          "expected " + std::to_string(table.names.size()) + " cells, found " + std::to_string(cells.size()));
    }
    table.lines.push_back(number);
    std::vector<double>& row = table.rows.emplace_back();
    std::vector<std::size_t>& columns = table.columns.emplace_back();
    row.reserve(cells.size());
    columns.reserve(cells.size());
    for (std::size_t i = 0; i < cells.size(); ++i) {
      columns.push_back(cells[i].column);
      if (cells[i].text.empty() && may_be_empty(table.names[i])) {
        row.push_back(std::numeric_limits<double>::quiet_NaN());
      } else if (detail::is_number(cells[i].text, value)) {
        row.push_back(value);
      } else {
        throw FileError(file, number, cells[i].column,
                        "expected a number for " + table.names[i] + ", found '" + std::string(cells[i].text) + "'");
      }
    }
  }
  if (table.names.empty()) {
    throw FileError(file, 1, 1, "expected a line of column names, found nothing");
  }
  return table;
}

/// The whole of a file, which may be empty. Throws FileError when it cannot be read.
[[nodiscard]] inline std::string read_whole(std::string const& file) {
  std::ifstream in(file, std::ios::binary);
  std::string content;
  std::array<char, 65536> part;
  while (in.read(part.data(), part.size()) || in.gcount() > 0) {
    content.append(part.data(), static_cast<std::size_t>(in.gcount()));
  }
  if (!in.is_open() || in.bad()) {
    throw FileError(file, "expected a file that can be read");
  }
  return content;
}

/// Writes a file as a whole or not at all: first beside it, then moved into its place. Throws FileError.
inline void write_whole(std::string const& file, std::string_view content) {
  std::string const beside = file + ".part";
  {
    std::ofstream out(beside, std::ios::binary | std::ios::trunc);
    out << content;
    out.close();
    if (!out) {
      std::remove(beside.c_str());
      throw FileError(
          file, "expected a place that can be written, with room for " + std::to_string(content.size()) + " bytes");
    }
  }
  if (std::rename(beside.c_str(), file.c_str()) != 0) {
    std::remove(beside.c_str());
    throw FileError(file, "expected to move the finished file into its place");
  }
}

}  // namespace wend::inline v0::lab
