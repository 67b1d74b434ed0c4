// wend/watch/log.hpp - the last decisions of a loop, with all they were made from, to be replayed on a laptop.
#pragma once

#include <array>
#include <atomic>
#include <concepts>
#include <cstddef>
#include <cstdint>
#include <span>
#include <type_traits>
#include <utility>

#include "wend/disc.hpp"
#include "wend/field.hpp"
#include "wend/moving_discs.hpp"
#include "wend/number.hpp"
#include "wend/watch/packed.hpp"

namespace wend::inline v0 {

template <Number S>
struct Situation;  // of loop.hpp, which lies above; whoever logs a loop includes it

/// One row of readings, for a log of a loop with a ranger. `DiscsKept` is the Capacity its tick is given.
template <Number S, int Beams, int DiscsKept = 16>
struct Readings {
  std::array<S, static_cast<std::size_t>(Beams)> ranges;  ///< metres, as the ranger gave them
};

namespace detail {

// What a record says of what the loop saw: the kind, its size, and how many discs are kept.
template <typename Seen>
struct SeenOf;
template <Number S, int N>
struct SeenOf<DiscSet<S, N>> {
  using Scalar = S;
  static constexpr std::uint8_t kind = 1;
  static constexpr int size = N, discs_kept = N;
};
template <Number S, int N>
struct SeenOf<MovingDiscSet<S, N>> {
  using Scalar = S;
  static constexpr std::uint8_t kind = 2;
  static constexpr int size = N, discs_kept = N;
};
template <Number S, int Beams, int DiscsKept>
struct SeenOf<Readings<S, Beams, DiscsKept>> {
  using Scalar = S;
  static constexpr std::uint8_t kind = 3;
  static constexpr int size = Beams, discs_kept = DiscsKept;
};

// One tick of a loop, on discs or on readings.
template <typename Loop, Number S, typename Seen, typename Memory>
[[nodiscard]] auto decide(Loop const& loop, Situation<S> const& now, Seen const& seen, Memory& memory) noexcept {
  if constexpr (SeenOf<Seen>::kind == 3) {
    std::span<S const, static_cast<std::size_t>(SeenOf<Seen>::size)> const ranges(seen.ranges);
    return loop.template tick<SeenOf<Seen>::discs_kept>(now, ranges, memory);
  } else {
    return loop.tick(now, seen, memory);
  }
}

}  // namespace detail

/// How the bytes of a dump lie. Everything little-endian; a CRC-32 covers all bytes before it in its block.
/// - header: "wendlog" and the version (8) | parameters_checksum (4) | payload bytes a record (4) | number of the first
///   record (4) | records (4) | bytes a number, kind of what is seen (1 + 1) | its size, discs kept (2 + 2) | bytes of
///   the memory, of the command (2 + 2) | CRC-32 (4)
/// - record: its number (4) | 1, or 0 when it was overwritten meanwhile and the payload is zeros (1) | payload: packed
///   situation, what was seen, memory before, command after | CRC-32 (4)
struct DumpLayout {
  /// The first bytes of a dump.
  static constexpr std::array<char, 7> magic{'w', 'e', 'n', 'd', 'l', 'o', 'g'};
  /// Of the layout: the byte after the magic.
  static constexpr std::uint8_t version = 1;
  /// All of the header, its CRC-32 included.
  static constexpr std::size_t header_bytes = 38;
  /// What a record takes beside its payload: number, flag and CRC-32.
  static constexpr std::size_t record_overhead = 9;
};

/// The last Capacity decisions of a loop, without a heap. `Seen` is what its tick is given: `DiscSet<float, 8>`,
/// `MovingDiscSet<float, 8>`, or `Readings<float, 16>`. A record takes record_bytes of memory, and five more in a dump.
///
///     DecisionLog<decltype(loop), DiscSet<float, 8>, 64> log;                        // some 12 KiB
///     Command<float> const command = log.tick(loop, now, discs, memory);             // instead of loop.tick(...)
///     log.dump(loop, [](std::byte byte) { send(byte); });                            // when somebody asks
///
/// On one core, tick may run in an interrupt of dump, or dump in one of tick: a record that is not finished is not
/// dumped, and one that is overwritten meanwhile is told as such. On two cores the caller has to lock.
template <typename LoopType, typename SeenType, int Capacity>
class DecisionLog {
  static_assert(Capacity > 0, "wend: DecisionLog<Loop, Seen, Capacity> needs room for one decision at least");

 public:
  /// The loop whose decisions are kept.
  using Loop = std::remove_cv_t<LoopType>;
  /// What a tick is given: discs or readings.
  using Seen = SeenType;
  /// The number that it computes in.
  using S = typename detail::SeenOf<Seen>::Scalar;
  /// What the loop remembers between ticks.
  using Memory = memory_t<Loop, S>;
  /// What a tick returns.
  using Command = decltype(detail::decide(std::declval<Loop const&>(), std::declval<Situation<S> const&>(),
                                          std::declval<Seen const&>(), std::declval<Memory&>()));
  static_assert(PlainNumber<S>, "wend: a log is of float or double");

  /// Bytes of a record, without its number.
  static constexpr std::size_t payload_bytes = packed_size<Situation<S>> + packed_size<Seen> + packed_size<Memory> +
                                               packed_size<Command>;
  static constexpr std::size_t record_bytes = payload_bytes + 4;  ///< in memory, with its number
  /// Bytes of a record in a dump.
  static constexpr std::size_t dumped_bytes = payload_bytes + DumpLayout::record_overhead;

  /// One control tick, and a record of it.
  Command tick(Loop const& loop, Situation<S> const& now, Seen const& seen, Memory& memory) noexcept {
    Memory const before = memory;
    Command const command = detail::decide(loop, now, seen, memory);
    add(now, seen, before, command);
    return command;
  }

  /// Keeps a decision that was made elsewhere: what went in, what was remembered before, what came out.
  void add(Situation<S> const& now, Seen const& seen, Memory const& before, Command const& command) noexcept {
    std::uint32_t const number = next_;
    if (number - first_ == static_cast<std::uint32_t>(Capacity)) {
      first_ = first_ + 1U;  // given up before it is overwritten, for a dump that comes in between
    }
    std::atomic_signal_fence(std::memory_order_seq_cst);
    Writer out{records_[place_of(number)].data()};
    pack(number, out);
    pack(now, out);
    pack(seen, out);
    pack(before, out);
    pack(command, out);
    std::atomic_signal_fence(std::memory_order_seq_cst);
    next_ = number + 1U;
  }

  /// How many decisions are kept.
  [[nodiscard]] int size() const noexcept { return static_cast<int>(next_ - first_); }
  /// How many decisions there is room for.
  [[nodiscard]] static constexpr int capacity() noexcept { return Capacity; }
  /// How many decisions there were, modulo 2^32.
  [[nodiscard]] std::uint32_t ticks() const noexcept { return next_; }

  /// Hands the header and the records, oldest first, to `sink`: sink(std::byte) for each byte, or
  /// `sink(std::span<std::byte const>)` for each block. `loop` is the one that decided. Takes 2 record_bytes of stack.
  template <typename Sink>
  void dump(Loop const& loop, Sink&& sink) const noexcept {
    std::uint32_t const first = first_;
    std::uint32_t const end = next_;
    std::array<std::byte, DumpLayout::header_bytes> header;
    Writer out{header.data()};
    for (char const letter : DumpLayout::magic) {
      out(static_cast<std::byte>(letter));
    }
    pack(DumpLayout::version, out);
    pack(parameters_checksum(loop), out);
    pack(static_cast<std::uint32_t>(payload_bytes), out);
    pack(first, out);
    pack(end - first, out);
    pack(static_cast<std::uint8_t>(sizeof(S)), out);
    pack(detail::SeenOf<Seen>::kind, out);
    pack(static_cast<std::uint16_t>(detail::SeenOf<Seen>::size), out);
    pack(static_cast<std::uint16_t>(detail::SeenOf<Seen>::discs_kept), out);
    pack(static_cast<std::uint16_t>(packed_size<Memory>), out);
    pack(static_cast<std::uint16_t>(packed_size<Command>), out);
    send(header, sink);
    for (std::uint32_t number = first; number != end; ++number) {
      std::array<std::byte, dumped_bytes> block;
      bool const kept = copy(number, block);
      if (!kept) {
        block.fill(std::byte{0});
      }
      Writer front{block.data()};
      pack(number, front);
      pack(kept, front);
      send(block, sink);
    }
  }

 private:
  struct Writer {
    std::byte* at;
    constexpr void operator()(std::byte byte) noexcept { *at++ = byte; }
  };
  using Record = std::array<std::byte, record_bytes>;

  [[nodiscard]] static constexpr std::size_t place_of(std::uint32_t number) noexcept {
    return static_cast<std::size_t>(number % static_cast<std::uint32_t>(Capacity));
  }

  // The payload of a record behind room for its number and mark; false when it was overwritten while it was copied.
  bool copy(std::uint32_t number, std::array<std::byte, dumped_bytes>& block) const noexcept {
    std::atomic_signal_fence(std::memory_order_seq_cst);
    Record const& record = records_[place_of(number)];
    for (std::size_t i = 0; i < payload_bytes; ++i) {
      block[i + 5] = record[i + 4];
    }
    std::array<std::byte, 4> expected;
    Writer out{expected.data()};
    pack(number, out);
    bool own = true;
    for (std::size_t i = 0; i < expected.size(); ++i) {
      own = own && record[i] == expected[i];
    }
    std::atomic_signal_fence(std::memory_order_seq_cst);
    return own && number - first_ < static_cast<std::uint32_t>(Capacity);
  }

  // Hands a block on with the checksum of what is before it in its last four bytes.
  template <std::size_t Bytes, typename Sink>
  static void send(std::array<std::byte, Bytes>& block, Sink& sink) noexcept {
    Crc32 sum;
    for (std::size_t i = 0; i < Bytes - 4; ++i) {
      sum(block[i]);
    }
    Writer out{block.data() + Bytes - 4};
    pack(sum.value(), out);
    if constexpr (std::invocable<Sink&, std::span<std::byte const>>) {
      sink(std::span<std::byte const>(block));
    } else {
      for (std::byte const byte : block) {
        sink(byte);
      }
    }
  }

  // Numbers of the oldest record that is whole and of the next one; volatile, as an interrupt may look at them.
  std::uint32_t volatile first_ = 0;
  std::uint32_t volatile next_ = 0;
  std::array<Record, static_cast<std::size_t>(Capacity)> records_{};
};

}  // namespace wend::inline v0
