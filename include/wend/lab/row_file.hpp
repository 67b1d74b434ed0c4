// wend/lab/row_file.hpp - the rows of a campaign, or of one shard of it, as a file that cannot be mistaken for whole.
#pragma once

#include <array>
#include <cerrno>
#include <charconv>
#include <cstddef>
#include <cstdint>
#include <cstdio>
#include <cstring>
#include <string>
#include <string_view>
#include <system_error>
#include <utility>
#include <vector>

#include <fcntl.h>
#include <unistd.h>

#include "wend/lab/csv.hpp"
#include "wend/lab/run_row.hpp"
#include "wend/watch/packed.hpp"

namespace wend::inline v0::lab {

/// What a campaign is: two of them with the same have the same rows.
struct CampaignIdentity {
  std::uint32_t fingerprint = 0;  ///< of loop, vehicle and scenes: see campaign_fingerprint
  std::uint64_t seed = 0;  ///< of all draws
  std::uint64_t runs = 0;  ///< in all, numbered from 0

  /// Whether the rows are the same.
  friend bool operator==(CampaignIdentity const&, CampaignIdentity const&) = default;
};

/// A part of a campaign: shard `number`, from 1, of `of`.
struct Shard {
  std::uint64_t number = 1;  ///< in [1, of]
  std::uint64_t of = 1;  ///< how many shards the campaign has

  /// Whether it is the same part.
  friend bool operator==(Shard const&, Shard const&) = default;

  /// The number of its first run, of `runs`. Its last one is before the next shard's first.
  [[nodiscard]] std::uint64_t first(std::uint64_t runs) const noexcept {
    // As even as can be, without a product that overflows.
    std::uint64_t const before = number - 1;
    return runs / of * before + (before < runs % of ? before : runs % of);
  }
  /// How many runs are its own, of `runs`. Shards differ by one run at most.
  [[nodiscard]] std::uint64_t size(std::uint64_t runs) const noexcept {
    return Shard{number + 1, of}.first(runs) - first(runs);
  }
};

/// The contents of a file of rows.
struct RowFile {
  CampaignIdentity identity;  ///< which campaign the rows are of
  Shard shard;  ///< which part of it
  bool complete = true;  ///< false when the shard was stopped before its last run
  std::vector<RunRow> rows;  ///< one a run, by run number
};

namespace detail {

inline constexpr std::string_view row_file_version = "wend rows 1";
inline constexpr std::string_view row_names =
    "run,world,ending,status,switches,time,path,straight,clearance,dwell,"
    "start_x,start_y,heading_x,heading_y,goal_x,goal_y";

// Numbers in their shortest form that reads back to the same bits.
template <typename T>
void append(std::string& text, T value) {
  std::array<char, 32> digits;
  text.append(digits.data(), std::to_chars(digits.data(), digits.data() + digits.size(), value).ptr);
}
inline void append_hex(std::string& text, std::uint32_t value) {
  std::array<char, 16> digits;
  text.append(digits.data(), static_cast<std::size_t>(std::snprintf(digits.data(), digits.size(), "%08x", value)));
}

[[nodiscard]] inline std::uint32_t checksum(std::string_view text) {
  Crc32 sum;
  for (char const c : text) {
    sum(static_cast<std::byte>(c));
  }
  return sum.value();
}

// Reads a text from the left; says where it went wrong.
class RowReader {
 public:
  RowReader(std::string const& file, std::string_view text) : file_(file), text_(text) {}

  [[nodiscard]] FileError wrong(std::string const& what) const { return {file_, line_, column_, what}; }
  [[nodiscard]] bool at(std::string_view word) const { return text_.substr(0, word.size()) == word; }

  void expect(std::string_view word) {
    if (!at(word)) {
      throw wrong("expected '" + std::string(word == "\n" ? "end of line" : word) + "'");
    }
    take(word.size());
    if (word == "\n") {
      ++line_;
      column_ = 1;
    }
  }
  template <typename T>
  [[nodiscard]] T number() {
    T value{};
    std::from_chars_result end{};
    if constexpr (std::is_floating_point_v<T>) {
      end = std::from_chars(text_.data(), text_.data() + text_.size(), value);
    } else {
      end = std::from_chars(text_.data(), text_.data() + text_.size(), value, base_);
    }
    if (end.ec != std::errc{}) {
      throw wrong("expected a number");
    }
    take(static_cast<std::size_t>(end.ptr - text_.data()));
    return value;
  }
  [[nodiscard]] std::uint32_t hex() {
    base_ = 16;
    auto const value = number<std::uint32_t>();
    base_ = 10;
    return value;
  }
  [[nodiscard]] std::string_view rest() const { return text_; }

 private:
  void take(std::size_t size) {
    text_.remove_prefix(size);
    column_ += size;
  }

  std::string const& file_;
  std::string_view text_;
  std::size_t line_ = 1;
  std::size_t column_ = 1;
  int base_ = 10;
};

// The numbers of a row, in the order of row_names, each through f.
template <typename Row, typename F>
void for_each_number(Row& row, F const& f) {
  f(row.time), f(row.path_length), f(row.straight_length), f(row.least_clearance), f(row.least_dwell);
  f(row.start.position.x()), f(row.start.position.y()), f(row.start.heading.x()), f(row.start.heading.y());
  f(row.goal.x()), f(row.goal.y());
}

// A small number that must be under `end`, as an enumeration.
template <typename Enum>
[[nodiscard]] Enum read_enum(RowReader& in, unsigned end) {
  auto const value = in.number<unsigned>();
  if (value >= end) {
    throw in.wrong("expected a number under " + std::to_string(end));
  }
  return static_cast<Enum>(value);
}

}  // namespace detail

/// The text of a file of rows:
///
///     wend rows 1
///     campaign <fingerprint, hexadecimal> seed <seed> runs <runs of the whole campaign>
///     shard <number>/<of>
///     run,world,ending,... (the names; ending and status by their numbers in Ending and Status)
///     <one line a row, numbers in decimal, such that they read back to the same bits; inf where there is no limit>
///     end <rows> <complete or stopped> <CRC-32 of all bytes before this line, hexadecimal>
///
/// Whatever is cut off, or changed by a few bits, no longer reads as one.
[[nodiscard]] inline std::string text_of(RowFile const& file) {
  using detail::append;
  std::string text(detail::row_file_version);
  text.reserve(256 + file.rows.size() * 200);
  text += "\ncampaign ";
  detail::append_hex(text, file.identity.fingerprint);
  text += " seed ";
  append(text, file.identity.seed);
  text += " runs ";
  append(text, file.identity.runs);
  text += "\nshard ";
  append(text, file.shard.number);
  text += '/';
  append(text, file.shard.of);
  text += '\n';
  text += detail::row_names;
  text += '\n';
  for (RunRow const& row : file.rows) {
    append(text, row.run);
    text += ',';
    append(text, row.world);
    text += ',';
    append(text, static_cast<int>(row.ending));
    text += ',';
    append(text, static_cast<int>(row.last_status));
    text += ',';
    append(text, row.switches);
    detail::for_each_number(row, [&text](double value) {
      text += ',';
      append(text, value);
    });
    text += '\n';
  }
  std::uint32_t const sum = detail::checksum(text);
  text += "end ";
  append(text, file.rows.size());
  text += file.complete ? " complete " : " stopped ";
  detail::append_hex(text, sum);
  text += '\n';
  return text;
}

/// Reads what text_of wrote. Throws FileError with the place where the text is not as expected. `name` is the file's.
/// Where at least the first three lines can be read, `header` is set to what they say, whatever comes after.
[[nodiscard]] inline RowFile parse_rows(std::string const& name, std::string_view text, RowFile* header = nullptr) {
  detail::RowReader in(name, text);
  RowFile file;
  in.expect(detail::row_file_version);
  in.expect("\n");
  in.expect("campaign ");
  file.identity.fingerprint = in.hex();
  in.expect(" seed ");
  file.identity.seed = in.number<std::uint64_t>();
  in.expect(" runs ");
  file.identity.runs = in.number<std::uint64_t>();
  in.expect("\n");
  in.expect("shard ");
  file.shard.number = in.number<std::uint64_t>();
  in.expect("/");
  file.shard.of = in.number<std::uint64_t>();
  if (file.shard.number < 1 || file.shard.number > file.shard.of) {
    throw in.wrong("expected a shard from 1 to " + std::to_string(file.shard.of));
  }
  in.expect("\n");
  if (header != nullptr) {
    *header = file;
  }
  in.expect(detail::row_names);
  in.expect("\n");
  std::uint64_t const first = file.shard.first(file.identity.runs);
  std::uint64_t const count = file.shard.size(file.identity.runs);
  while (!in.at("end ")) {
    if (in.rest().empty()) {
      throw in.wrong("the file ends before its last line: it was cut off");
    }
    RunRow row;
    row.run = in.number<std::uint64_t>();
    if (row.run - first >= count || (!file.rows.empty() && row.run <= file.rows.back().run)) {
      throw in.wrong("expected a run of this shard, in order");
    }
    in.expect(",");
    row.world = in.number<std::uint64_t>();
    in.expect(",");
    row.ending = detail::read_enum<Ending>(in, 3);
    in.expect(",");
    row.last_status = detail::read_enum<Status>(in, 8);
    in.expect(",");
    row.switches = in.number<int>();
    detail::for_each_number(row, [&in](double& value) {
      in.expect(",");
      value = in.number<double>();
    });
    in.expect("\n");
    file.rows.push_back(row);
  }
  std::uint32_t const sum = detail::checksum(text.substr(0, text.size() - in.rest().size()));
  in.expect("end ");
  if (in.number<std::uint64_t>() != file.rows.size()) {
    throw in.wrong("the number of rows does not agree with the rows");
  }
  file.complete = in.at(" complete ");
  in.expect(file.complete ? " complete " : " stopped ");
  if (file.complete && file.rows.size() != count) {
    throw in.wrong("expected " + std::to_string(count) + " rows");
  }
  if (in.hex() != sum) {
    throw in.wrong("the checksum does not agree: something in this file was changed");
  }
  in.expect("\n");
  if (!in.rest().empty()) {
    throw in.wrong("expected nothing after the last line");
  }
  return file;
}

namespace detail {

// Throws what went wrong with a file, after what the system calls it.
[[noreturn]] inline void throw_system_error(std::string const& file, char const* what) {
  throw FileError(file, std::string("could not ") + what + ": " + std::strerror(errno));
}

}  // namespace detail

/// Writes a file so that it is there as a whole and on the disk, or not at all: under another name first, forced out,
/// and renamed. The other name ends in the process's number and ".part"; one that is left behind was killed. Throws
/// FileError when the disk is full, for example. POSIX.
inline void write_surely(std::string const& file, std::string_view content) {
  std::string const beside = file + "." + std::to_string(::getpid()) + ".part";
  int const out = ::open(beside.c_str(), O_WRONLY | O_CREAT | O_TRUNC | O_CLOEXEC, 0644);
  if (out < 0) {
    detail::throw_system_error(beside, "open");
  }
  char const* failed = nullptr;
  for (std::string_view left = content; !left.empty() && failed == nullptr;) {
    ssize_t const written = ::write(out, left.data(), left.size());
    if (written > 0) {
      left.remove_prefix(static_cast<std::size_t>(written));
    } else if (written == 0 || errno != EINTR) {
      failed = "write";
    }
  }
  if (failed == nullptr && ::fsync(out) != 0 && errno != EINVAL) {  // EINVAL: a place that needs no forcing
    failed = "force to the disk";
  }
  int error = errno;
  if (::close(out) != 0 && failed == nullptr) {
    failed = "close";
    error = errno;
  }
  if (failed == nullptr && std::rename(beside.c_str(), file.c_str()) != 0) {
    failed = "move into its place";
    error = errno;
  }
  if (failed != nullptr) {
    std::remove(beside.c_str());
    errno = error;
    detail::throw_system_error(file, failed);
  }
}

}  // namespace wend::inline v0::lab
