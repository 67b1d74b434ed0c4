// A line of text, made without the C library.
#pragma once

#include <array>
#include <bit>
#include <cstddef>
#include <cstdint>

#include "machines/machine.hpp"

/// Words with a space between; what does not fit is cut off.
class Line {
 public:
  Line& word(char const* text) noexcept {
    if (length_ > 0) {
      add(' ');
    }
    for (; *text != '\0'; ++text) {
      add(*text);
    }
    return *this;
  }
  Line& number(std::uint32_t value) noexcept {
    std::array<char, 11> digits{};
    std::size_t first = digits.size() - 1;
    do {
      digits[--first] = static_cast<char>('0' + value % 10U);
      value /= 10U;
    } while (value != 0);
    return word(&digits[first]);
  }
  Line& bits(std::uint32_t value) noexcept {
    std::array<char, 9> digits{};
    for (std::size_t i = 0; i < 8; ++i) {
      digits[i] = "0123456789abcdef"[(value >> (28U - 4U * i)) & 15U];
    }
    return word(digits.data());
  }
  Line& bits(float value) noexcept { return bits(std::bit_cast<std::uint32_t>(value)); }
  void print() noexcept {
    add('\n');
    machine::put(text_.data());
    text_ = {};
    length_ = 0;
  }

 private:
  void add(char c) noexcept {
    if (length_ + 1 < text_.size()) {
      text_[length_++] = c;
    }
  }
  std::array<char, 160> text_{};
  std::size_t length_ = 0;
};
