// wend/lab/dump.hpp - reads what a DecisionLog dumped, up to the first record that is not as it was written.
#pragma once

#include <array>
#include <cstddef>
#include <cstdint>
#include <cstdio>
#include <string>
#include <string_view>
#include <vector>

#include "wend/lab/csv.hpp"
#include "wend/lab/unpack.hpp"
#include "wend/loop.hpp"
#include "wend/watch/log.hpp"

namespace wend::inline v0::lab {

/// The first block of a dump. See DumpLayout for where each of these lies.
struct DumpHeader {
  std::uint32_t parameters = 0;     ///< parameters_checksum of the loop that decided
  std::uint32_t payload_bytes = 0;  ///< of one record
  std::uint32_t first = 0;          ///< number of the first record: ticks before it since the log was made
  std::uint32_t records = 0;        ///< that were sent
  std::uint8_t number_bytes = 0;    ///< 4 for float, 8 for double
  std::uint8_t seen_kind = 0;       ///< 1 discs, 2 discs that move, 3 readings
  std::uint16_t seen_size = 0;      ///< capacity of the set, or beams
  std::uint16_t discs_kept = 0;  ///< how many discs a loop with a sensing keeps of the readings
  std::uint16_t memory_bytes = 0;  ///< of the loop's memory in a record
  std::uint16_t command_bytes = 0;  ///< of the command in a record
};

/// One decision as it was logged. `number` counts the ticks of the log.
template <typename Loop, typename Seen>
struct Decision {
  /// The number that the loop computed in.
  using S = typename v0::detail::SeenOf<Seen>::Scalar;
  std::uint32_t number = 0;  ///< modulo 2^32
  Situation<S> now;  ///< pose, goal and times that went in
  Seen seen;  ///< discs or readings that went in
  memory_t<Loop, S> before;  ///< what the loop remembered when the tick began
  typename DecisionLog<Loop, Seen, 1>::Command command;  ///< what came out
};

/// The good records of a dump, up to the first that is not.
template <typename Loop, typename Seen>
struct Dump {
  DumpHeader header;  ///< as it was read
  std::vector<Decision<Loop, Seen>> decisions;  ///< in the order of their numbers
  std::vector<std::uint32_t> overwritten;  ///< numbers of records that the machine overwrote while it dumped
  std::string damage;                      ///< which record is not good, and why; empty when all are
};

namespace detail {

// Whether the last four bytes of a block are the checksum of the others.
inline bool is_whole(std::string_view block) {
  Crc32 sum;
  for (char const byte : block.substr(0, block.size() - 4)) {
    sum(static_cast<std::byte>(byte));
  }
  DumpReader in{block.substr(block.size() - 4)};
  return in.bits(4) == sum.value();
}

inline std::string in_hex(std::uint64_t bits, int digits) {
  std::array<char, 24> text{};
  std::snprintf(text.data(), text.size(), "0x%0*llx", digits, static_cast<unsigned long long>(bits));
  return text.data();
}

}  // namespace detail

/// Reads the header of a dump. Throws FileError when these bytes do not begin with a whole one.
[[nodiscard]] inline DumpHeader read_dump_header(std::string const& file, std::string_view bytes) {
  std::string_view const magic(DumpLayout::magic.data(), DumpLayout::magic.size());
  if (bytes.substr(0, magic.size()) != magic) {
    throw FileError(file, "expected a dump of decisions, which begins with '" + std::string(magic) + "'");
  }
  if (bytes.size() < DumpLayout::header_bytes) {
    throw FileError(file, "the dump ends within its header: expected " + std::to_string(DumpLayout::header_bytes) +
                              " bytes, found " + std::to_string(bytes.size()));
  }
  auto const version = static_cast<unsigned char>(bytes[magic.size()]);
  if (version != DumpLayout::version) {
    throw FileError(file, "expected a dump of version " + std::to_string(DumpLayout::version) + ", found version " +
                              std::to_string(version));
  }
  if (!detail::is_whole(bytes.substr(0, DumpLayout::header_bytes))) {
    throw FileError(file, "the dump's header is damaged: its checksum is not that of its bytes");
  }
  DumpHeader header;
  detail::DumpReader in{bytes.substr(magic.size() + 1)};
  detail::unpack(in, header.parameters);
  detail::unpack(in, header.payload_bytes);
  detail::unpack(in, header.first);
  detail::unpack(in, header.records);
  detail::unpack(in, header.number_bytes);
  detail::unpack(in, header.seen_kind);
  detail::unpack(in, header.seen_size);
  detail::unpack(in, header.discs_kept);
  detail::unpack(in, header.memory_bytes);
  detail::unpack(in, header.command_bytes);
  return header;
}

/// Why a dump cannot be replayed on a loop that is given a Seen; empty when it can.
template <typename Seen, typename Loop>
[[nodiscard]] std::string misfit(DumpHeader const& header, Loop const& loop) {
  using Log = DecisionLog<Loop, Seen, 1>;
  using Of = v0::detail::SeenOf<Seen>;
  auto const differs = [](char const* what, std::size_t found, std::size_t expected) {
    return "expected " + std::to_string(expected) + " for " + what + ", found " + std::to_string(found);
  };
  if (header.seen_kind != Of::kind) {
    return differs("what is seen (1 discs, 2 discs that move, 3 readings)", header.seen_kind, Of::kind);
  }
  if (header.seen_size != Of::size) {
    return differs(Of::kind == 3 ? "the beams" : "the capacity of the discs", header.seen_size,
                   static_cast<std::size_t>(Of::size));
  }
  if (header.discs_kept != Of::discs_kept) {
    return differs("the discs kept", header.discs_kept, static_cast<std::size_t>(Of::discs_kept));
  }
  if (header.number_bytes != sizeof(typename Log::S)) {
    return differs("the bytes of a number", header.number_bytes, sizeof(typename Log::S));
  }
  if (header.memory_bytes != packed_size<typename Log::Memory>) {
    return differs("the bytes of the memory", header.memory_bytes, packed_size<typename Log::Memory>);
  }
  if (header.command_bytes != packed_size<typename Log::Command>) {
    return differs("the bytes of a command", header.command_bytes, packed_size<typename Log::Command>);
  }
  if (header.payload_bytes != Log::payload_bytes) {
    return differs("the bytes of a record", header.payload_bytes, Log::payload_bytes);
  }
  if (header.parameters != parameters_checksum(loop)) {
    return "was decided with other parameters: their checksum is " + detail::in_hex(header.parameters, 8) + ", here " +
           detail::in_hex(parameters_checksum(loop), 8);
  }
  return "";
}

/// Reads a dump of decisions of `loop`. Throws FileError when the header is no good, or of another loop. Of the
/// records, those before the first that is damaged, out of order or cut short are given, and `damage` tells which one
/// that is.
template <typename Seen, typename Loop>
[[nodiscard]] Dump<Loop, Seen> read_dump(std::string const& file, std::string_view bytes, Loop const& loop) {
  using Log = DecisionLog<Loop, Seen, 1>;
  Dump<Loop, Seen> dump;
  dump.header = read_dump_header(file, bytes);
  if (std::string const why = misfit<Seen>(dump.header, loop); !why.empty()) {
    throw FileError(file, why);
  }
  bytes.remove_prefix(DumpLayout::header_bytes);
  for (std::uint32_t i = 0; i < dump.header.records; ++i) {
    std::uint32_t const number = dump.header.first + i;
    auto const refuse = [&](std::string const& why) {
      dump.damage = "record " + std::to_string(i + 1) + " of " + std::to_string(dump.header.records) + " (tick " +
                    std::to_string(number) + ") " + why;
      return dump;
    };
    if (bytes.size() < Log::dumped_bytes) {
      return refuse("is cut short: expected " + std::to_string(Log::dumped_bytes) + " bytes, found " +
                    std::to_string(bytes.size()));
    }
    std::string_view const block = bytes.substr(0, Log::dumped_bytes);
    bytes.remove_prefix(Log::dumped_bytes);
    if (!detail::is_whole(block)) {
      return refuse("is damaged: its checksum is not that of its bytes");
    }
    detail::DumpReader in{block};
    if (auto const found = in.bits(4); found != number) {
      return refuse("is out of order: it says that it is tick " + std::to_string(found));
    }
    bool kept = false;
    detail::unpack(in, kept);
    if (in.good && !kept) {
      dump.overwritten.push_back(number);
      continue;
    }
    Decision<Loop, Seen> decision;
    decision.number = number;
    detail::unpack(in, decision.now);
    detail::unpack(in, decision.seen);
    detail::unpack(in, decision.before);
    detail::unpack(in, decision.command);
    if (!in.good) {
      return refuse("holds what no machine writes: a yes or no that is neither, or discs that cannot be");
    }
    dump.decisions.push_back(decision);
  }
  if (!bytes.empty()) {
    dump.damage = std::to_string(bytes.size()) + " bytes follow the last of " + std::to_string(dump.header.records) +
                  " records";
  }
  return dump;
}

}  // namespace wend::inline v0::lab
