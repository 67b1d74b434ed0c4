// A whole number on the command line.
#pragma once

#include <charconv>
#include <cstdint>
#include <cstdio>
#include <cstdlib>
#include <string_view>
#include <system_error>

/// The number that an option has, from `least` to `most`; says what is wrong, and ends the program, if it is none.
inline std::uint64_t whole_number(char const* program, char const* option, std::string_view text, std::uint64_t least,
                                  std::uint64_t most = UINT64_MAX) {
  std::uint64_t value = 0;
  auto const parsed = std::from_chars(text.data(), text.data() + text.size(), value);
  if (parsed.ec != std::errc{} || parsed.ptr != text.data() + text.size() || value < least || value > most) {
    std::fprintf(stderr, "%s: %s expects a whole number from %llu", program, option,
                 static_cast<unsigned long long>(least));
    if (most < UINT64_MAX) {
      std::fprintf(stderr, " to %llu", static_cast<unsigned long long>(most));
    }
    std::fprintf(stderr, ", found '%.*s'\n", static_cast<int>(text.size()), text.data());
    std::exit(2);
  }
  return value;
}
