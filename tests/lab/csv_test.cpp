// Tables of numbers: what of RFC 4180 (Shafranovich 2005, comma-separated values) the format here takes, what it
// refuses, and where it says the mistake is (file:line:column from 1, as compilers do; common practice, no source).
#include <cmath>
#include <cstddef>
#include <filesystem>
#include <fstream>
#include <string>
#include <string_view>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/csv.hpp"

namespace {

using wend::lab::FileError;
using wend::lab::parse_table;
using wend::lab::Table;

bool never(std::string const&) { return false; }

Table parse(std::string_view content) { return parse_table("stems.csv", content, never); }

// The message of the error that a content ends in; "" when it ends in none.
std::string error_in(std::string_view content) {
  try {
    static_cast<void>(parse(content));
    return "";
  } catch (FileError const& error) {
    return error.what();
  }
}

template <typename F>
std::string error_of(F const& f) {
  try {
    f();
    return "";
  } catch (FileError const& error) {
    return error.what();
  }
}

// A fresh folder of its own, taken away at the end.
struct Folder {
  std::filesystem::path path = std::filesystem::temp_directory_path() / "wend_csv_test";
  Folder() {
    std::filesystem::remove_all(path);
    std::filesystem::create_directories(path);
  }
  ~Folder() { std::filesystem::remove_all(path); }
  Folder(Folder const&) = delete;
  Folder& operator=(Folder const&) = delete;
  [[nodiscard]] std::string file(char const* name) const { return (path / name).string(); }
  [[nodiscard]] int entries() const {
    int n = 0;
    for ([[maybe_unused]] auto const& entry : std::filesystem::directory_iterator(path)) {
      ++n;
    }
    return n;
  }
};

}  // namespace

TEST_CASE("a table has names, rows of numbers, and the place of each") {
  Table const table = parse("x,y,diameter\n1,2.5,-3e-2\n4,5,6\n");
  CHECK(table.names == std::vector<std::string>{"x", "y", "diameter"});
  REQUIRE(table.rows.size() == 2);
  CHECK(table.rows[0] == std::vector<double>{1.0, 2.5, -0.03});
  CHECK(table.rows[1] == std::vector<double>{4.0, 5.0, 6.0});
  CHECK(table.lines == std::vector<std::size_t>{2, 3});
  CHECK(table.columns[0] == std::vector<std::size_t>{1, 3, 7});
  CHECK(table.column("diameter") == 2);
  CHECK(table.names_line == 1);
  CHECK(std::string(table.error(0, 2, "expected more").what()) == "stems.csv:2:7: expected more");
}

TEST_CASE("line ends of CR LF, a byte order mark, empty lines, spaces and a last line without an end do not matter") {
  std::vector<std::vector<double>> const expected{{1.0, 2.0}, {3.0, 4.0}};
  for (std::string_view const content :
       {"x,y\n1,2\n3,4\n", "x,y\n1,2\n3,4", "x,y\r\n1,2\r\n3,4\r\n", "\xEF\xBB\xBFx,y\n1,2\n3,4\n",
        "\n  \nx,y\n\n1,2\n\t\n3,4\n\n\n", " x ,\ty\n 1, 2 \n\t3\t,4  \n"}) {
    Table const table = parse(content);
    CHECK(table.names == std::vector<std::string>{"x", "y"});
    CHECK(table.rows == expected);
  }
  Table const late = parse("\n\nx,y\n\n1,2\r\n \n3,4");
  CHECK(late.names_line == 3);
  CHECK(late.lines == std::vector<std::size_t>{5, 7});
}

TEST_CASE("a table may have names and no row") { CHECK(parse("x,y\n").rows.empty()); }

TEST_CASE("nothing is not a table") {
  for (std::string_view const content : {"", "\n", "\r\n \n\t\n", "\xEF\xBB\xBF"}) {
    CHECK(error_in(content) == "stems.csv:1:1: expected a line of column names, found nothing");
  }
}

TEST_CASE("a missing column is told by name, at the line of the names") {
  CHECK(error_of([] { static_cast<void>(parse("x,y\n1,2\n").column("diameter")); }) ==
        "stems.csv:1:1: expected a column named 'diameter'");
  CHECK(error_of([] { static_cast<void>(parse("\n\nx,y\n1,2\n").column("X")); }) ==
        "stems.csv:3:1: expected a column named 'X'");
}

TEST_CASE("a name that is missing, a number, or there twice is told") {
  CHECK(error_in("x,,y\n1,2,3\n") == "stems.csv:1:3: expected a column name, found ''");
  CHECK(error_in("1,2,3\n4,5,6\n") == "stems.csv:1:1: expected a column name, found '1'");
  CHECK(error_in("x, 2.5,y\n") == "stems.csv:1:4: expected a column name, found '2.5'");
  CHECK(error_in("x,y, x\n1,2,3\n") == "stems.csv:1:6: expected another column name, found 'x' again");
}

TEST_CASE("too few and too many cells are told: at the last one, and at the first one too many") {
  CHECK(error_in("x,y,z\n1,2,3\n4,5\n") == "stems.csv:3:3: expected 3 cells, found 2");
  CHECK(error_in("x,y,z\n7\n") == "stems.csv:2:1: expected 3 cells, found 1");
  CHECK(error_in("x,y\n1,2,33,44\n") == "stems.csv:2:5: expected 2 cells, found 4");
  CHECK(error_in("x,y\n1,2,\n") == "stems.csv:2:5: expected 2 cells, found 3");
}

TEST_CASE("what is no finite number is refused, at its first character") {
  struct Bad {
    char const* cell;
    char const* found;
  };
  for (Bad const bad :
       {Bad{"oak", "oak"}, Bad{"nan", "nan"}, Bad{"inf", "inf"}, Bad{"-inf", "-inf"}, Bad{"1e999", "1e999"},
        Bad{"0x1p3", "0x1p3"}, Bad{"1.5m", "1.5m"}, Bad{"1 2", "1 2"}, Bad{"1.2.3", "1.2.3"}, Bad{"--1", "--1"},
        Bad{"\"1\"", "\"1\""}, Bad{"1;2", "1;2"}, Bad{"", ""}, Bad{"-", "-"}, Bad{".", "."}, Bad{"e5", "e5"}}) {
    INFO(std::string(bad.cell));
    CHECK(error_in(std::string("x,y\n10,20\n30,") + bad.cell + "\n") ==
          std::string("stems.csv:3:4: expected a number for y, found '") + bad.found + "'");
  }
  CHECK(error_in("x,y\n1,  oak  \n") == "stems.csv:2:5: expected a number for y, found 'oak'");
  CHECK(error_in("\xEF\xBB\xBFx,y\r\noak,1\r\n") == "stems.csv:2:1: expected a number for x, found 'oak'");
}

// In UTF-8 (RFC 3629) a letter such as e with an acute takes two bytes, the euro sign three: one character each.
TEST_CASE("columns count characters, not bytes") {
  CHECK(error_in("\xC3\xA9t\xC3\xA9,\xE2\x82\xAC,,y\n") == "stems.csv:1:7: expected a column name, found ''");
  CHECK(error_in("x,y,z\n\xC3\xA9,1,2\n") == "stems.csv:2:1: expected a number for x, found '\xC3\xA9'");
}

TEST_CASE("an empty cell is not-a-number where it may be empty, and refused elsewhere") {
  auto const ranges_only = [](std::string const& name) { return name == "range"; };
  Table const table = parse_table("run.csv", "time,range\n1,\n2, \n3,4\n", ranges_only);
  REQUIRE(table.rows.size() == 3);
  CHECK(std::isnan(table.rows[0][1]));
  CHECK(std::isnan(table.rows[1][1]));
  CHECK(table.rows[2][1] == 4.0);
  CHECK(error_of([&] { static_cast<void>(parse_table("run.csv", "time,range\n,4\n", ranges_only)); }) ==
        "run.csv:2:1: expected a number for time, found ''");
  CHECK(error_of([&] { static_cast<void>(parse_table("run.csv", "time,range\n1,nan\n", ranges_only)); }) ==
        "run.csv:2:3: expected a number for range, found 'nan'");
}

TEST_CASE("read_whole gives every byte of a file, and none of an empty one") {
  Folder const folder;
  std::string content(200000, 'x');
  content[5] = '\0';
  content[70000] = '\r';
  content.back() = '\n';
  std::ofstream(folder.file("big"), std::ios::binary) << content;
  std::ofstream(folder.file("empty"), std::ios::binary).close();
  CHECK(wend::lab::read_whole(folder.file("big")) == content);
  CHECK(wend::lab::read_whole(folder.file("empty")).empty());
}

TEST_CASE("read_whole says which file it cannot read") {
  Folder const folder;
  for (std::string const& file : {folder.file("missing.csv"), folder.path.string()}) {  // the second one is a folder
    CHECK(error_of([&file] { static_cast<void>(wend::lab::read_whole(file)); }) ==
          file + ": expected a file that can be read");
  }
}

TEST_CASE("write_whole writes every byte, over what was there, and leaves nothing beside") {
  Folder const folder;
  std::string const file = folder.file("out.csv");
  wend::lab::write_whole(file, "first, and longer\n");
  std::string const content("second\0\r\n", 9);
  wend::lab::write_whole(file, content);
  CHECK(wend::lab::read_whole(file) == content);
  CHECK(folder.entries() == 1);
}

TEST_CASE("write_whole without a folder to write to says so and leaves nothing") {
  Folder const folder;
  std::string const file = folder.file("no/such/folder/out.csv");
  CHECK(error_of([&file] { wend::lab::write_whole(file, "12345"); }) ==
        file + ": expected a place that can be written, with room for 5 bytes");
  CHECK(folder.entries() == 0);
  std::ofstream(folder.file("plain")) << "x";
  CHECK_FALSE(error_of([&] { wend::lab::write_whole(folder.file("plain/out.csv"), "12345"); }).empty());
  CHECK(folder.entries() == 1);
}

TEST_CASE("write_whole keeps what it cannot replace, and leaves nothing beside") {
  Folder const folder;
  std::filesystem::create_directories(folder.path / "taken" / "inside");
  std::string const file = folder.file("taken");
  CHECK(error_of([&file] { wend::lab::write_whole(file, "12345"); }) ==
        file + ": expected to move the finished file into its place");
  CHECK(std::filesystem::is_directory(folder.path / "taken" / "inside"));
  CHECK(folder.entries() == 1);
}

#if defined(__linux__)
// A file that can be opened and not written to: Linux gives "no space left" for what is sent to /dev/full (man 4 full).
TEST_CASE("write_whole on a full disk keeps the old file and leaves nothing half written") {
  Folder const folder;
  std::string const file = folder.file("out.csv");
  wend::lab::write_whole(file, "old");
  std::filesystem::create_symlink("/dev/full", file + ".part");
  CHECK(error_of([&file] { wend::lab::write_whole(file, "12345"); }) ==
        file + ": expected a place that can be written, with room for 5 bytes");
  CHECK(wend::lab::read_whole(file) == "old");
  CHECK(folder.entries() == 1);
}
#endif
