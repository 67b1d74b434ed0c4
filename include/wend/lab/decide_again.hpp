// wend/lab/decide_again.hpp - decides logged decisions again, and tells every bit in which that differs.
#pragma once

#include <array>
#include <bit>
#include <cstddef>
#include <cstdint>
#include <cstdio>
#include <functional>
#include <string>
#include <type_traits>
#include <vector>

#include "wend/lab/dump.hpp"
#include "wend/lab/member_names.hpp"
#include "wend/watch/log.hpp"

namespace wend::inline v0::lab {

namespace detail {

inline std::string in_words(bool mask) { return mask ? "yes" : "no"; }
template <PlainNumber S>
std::string in_words(S const& x) {
  std::array<char, 40> text{};
  std::snprintf(text.data(), text.size(), sizeof(S) == 4 ? "%.9g" : "%.17g", static_cast<double>(x));
  using Bits = std::conditional_t<sizeof(S) == 4, std::uint32_t, std::uint64_t>;
  return text.data() + (" (" + in_hex(std::bit_cast<Bits>(x), 2 * sizeof(S)) + ")");
}

// Takes a path and what was logged and decided there. One type, so that loops share the code that compares.
using Report = std::function<void(std::string const&, std::string const&, std::string const&)>;

// Reports each number or mask in which two structs of one type differ.
template <typename T>
void for_each_difference(std::string const& path, T const& logged, T const& decided, Report const& report) {
  if constexpr (std::is_same_v<T, bool>) {
    if (logged != decided) {
      report(path, in_words(logged), in_words(decided));
    }
  } else if constexpr (std::is_floating_point_v<T>) {
    using Bits = std::conditional_t<sizeof(T) == 4, std::uint32_t, std::uint64_t>;
    if (std::bit_cast<Bits>(logged) != std::bit_cast<Bits>(decided)) {
      report(path, in_words(logged), in_words(decided));
    }
  } else if constexpr (std::is_integral_v<T> || std::is_enum_v<T>) {
    if (logged != decided) {
      report(path, std::to_string(static_cast<long long>(logged)), std::to_string(static_cast<long long>(decided)));
    }
  } else if constexpr (v0::detail::IsVec2<T>::value) {
    for_each_difference(path + ".x", logged.x(), decided.x(), report);
    for_each_difference(path + ".y", logged.y(), decided.y(), report);
  } else if constexpr (requires { logged.begin(), logged.size(); }) {
    for (std::size_t i = 0; i < logged.size(); ++i) {
      for_each_difference(path + "[" + std::to_string(i) + "]", logged[i], decided[i], report);
    }
  } else if constexpr (!std::is_empty_v<T>) {
    for_each_named_member(logged, decided, [&](std::string const& name, auto const& of_logged, auto const& of_decided) {
      for_each_difference(path + "." + name, of_logged, of_decided, report);
    });
  }
}

}  // namespace detail

/// Decides one decision again, and tells each member in which that differs: of the command, bit by bit, and of what the
/// next record says was remembered. A next record with a fresh memory has had a new goal, and is no difference. Lines
/// like "tick 12: decides differently: command.wheels.left: logged 1.5 (0x3fc00000), decided 1.25 (0x3fa00000)".
template <typename Loop, typename Seen>
[[nodiscard]] std::vector<std::string> decide_again(Loop const& loop, Decision<Loop, Seen> const& decision,
                                                    Decision<Loop, Seen> const* next) {
  std::vector<std::string> lines;
  auto after = decision.before;
  auto const command = v0::detail::decide(loop, decision.now, decision.seen, after);
  auto const report = [&lines](std::uint32_t number, std::string const& what) -> detail::Report {
    return [&lines, number, what](std::string const& path, std::string const& logged, std::string const& decided) {
      lines.push_back("tick " + std::to_string(number) + ": decides differently: " + what + path + ": logged " +
                      logged + ", decided " + decided);
    };
  };
  detail::for_each_difference("command", decision.command, command, report(decision.number, ""));
  if (next != nullptr && next->number == decision.number + 1U) {
    bool fresh = true;
    detail::for_each_difference("", next->before, decltype(after){}, [&](auto const&...) { fresh = false; });
    if (!fresh) {
      detail::for_each_difference("memory", next->before, after, report(next->number, "before it, "));
    }
  }
  return lines;
}

/// The same over all good records of a dump.
template <typename Loop, typename Seen>
[[nodiscard]] std::vector<std::string> decide_again(Loop const& loop, Dump<Loop, Seen> const& dump) {
  std::vector<std::string> lines;
  for (std::size_t i = 0; i < dump.decisions.size(); ++i) {
    auto const* next = i + 1 < dump.decisions.size() ? &dump.decisions[i + 1] : nullptr;
    auto const found = decide_again(loop, dump.decisions[i], next);
    lines.insert(lines.end(), found.begin(), found.end());
  }
  return lines;
}

}  // namespace wend::inline v0::lab
