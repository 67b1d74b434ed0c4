// wend/lab/scene_line.hpp - one line of a scene file: its words and numbers, and where in it something is wrong.
#pragma once

#include <array>
#include <charconv>
#include <cmath>
#include <cstddef>
#include <string>
#include <string_view>
#include <system_error>
#include <type_traits>
#include <vector>

#include "wend/lab/csv.hpp"

namespace wend::inline v0::lab {

namespace detail {

// In bytes. Seven numbers take under 200: whoever writes more on a line has lost a line end.
inline constexpr std::size_t longest_scene_line = 1000;

// What a number may be.
struct NumberRange {
  double low;
  double high;
  char const* unit;
  bool over_low = false;  // low itself is out

  // NaN is in no range.
  [[nodiscard]] bool contains(double value) const { return (over_low ? value > low : value >= low) && value <= high; }

  [[nodiscard]] std::string text() const {
    auto const digits = [](double value) {
      std::array<char, 32> to;
      return std::string(to.data(),
                         std::to_chars(to.data(), to.data() + to.size(), value, std::chars_format::fixed).ptr);
    };
    return (over_low ? "over " : "from ") + digits(low) + " to " + digits(high) + (*unit != '\0' ? " " : "") + unit;
  }
};

// A line taken apart at blanks, up to a '#'. Throws FileError for a line that is too long or holds control characters.
class SceneLine {
 public:
  // The next line of `content`, which loses it.
  SceneLine(std::string const& file, std::size_t number, std::string_view& content) : file_(&file), number_(number) {
    std::size_t const end = content.find('\n');
    text_ = content.substr(0, end);
    content.remove_prefix(end == content.npos ? content.size() : end + 1);
    if (!text_.empty() && text_.back() == '\r') {
      text_.remove_suffix(1);
    }
    if (text_.size() > longest_scene_line) {
      throw wrong(characters(text_.substr(0, longest_scene_line)) + 1,
                  "expected a line of at most " + std::to_string(longest_scene_line) + " bytes, found " +
                      std::to_string(text_.size()));
    }
    std::size_t column = 1;
    std::size_t counted = 0;
    bool comment = false;
    bool in_word = false;
    for (std::size_t i = 0; i < text_.size(); ++i) {
      unsigned const byte = static_cast<unsigned char>(text_[i]);
      bool const blank = byte == ' ' || byte == '\t';
      if ((byte < 0x20 && byte != '\t') || byte == 0x7F) {
        throw wrong(column + characters(text_.substr(counted, i - counted)),
                    "expected text, found a byte of value " + std::to_string(byte));
      }
      comment = comment || byte == '#';
      if (comment) {
        continue;
      }
      if (!blank && !in_word) {
        column += characters(text_.substr(counted, i - counted));
        counted = i;
        words_.push_back({text_.substr(i), column});
      }
      if (in_word && blank) {
        close_word(i);
      }
      in_word = !blank;
      code_end_ = blank ? code_end_ : i + 1;
    }
    if (in_word) {
      close_word(code_end_);
    }
  }

  [[nodiscard]] std::vector<Cell> const& words() const { return words_; }
  [[nodiscard]] std::size_t number() const { return number_; }

  // What follows the first word, a '#' and all, without the blanks around it.
  [[nodiscard]] std::string_view rest() const {
    std::string_view rest = text_.substr(static_cast<std::size_t>(words_[0].text.data() - text_.data()));
    rest.remove_prefix(words_[0].text.size());
    std::size_t const lead = rest.find_first_not_of(" \t");
    rest.remove_prefix(lead == rest.npos || lead == 0 ? rest.size() : lead);  // a '#' at once: a comment
    return rest.substr(0, rest.find_last_not_of(" \t") + 1);
  }

  [[nodiscard]] FileError wrong(std::size_t column, std::string const& what) const {
    return {*file_, number_, column, what};
  }
  // A word that is not what it has to be, or no word where one has to be.
  [[nodiscard]] FileError wrong_word(std::size_t place, std::string const& expected) const {
    return place < words_.size()
               ? wrong(words_[place].column, "expected " + expected + ", found " + quoted(words_[place].text))
               : wrong(end_column(), "expected " + expected + ", found nothing");
  }
  // Throws unless `count` words follow the first: at the first that is too many, or behind the last.
  void expect_words(std::size_t count, std::string const& usage) const {
    if (words_.size() != count + 1) {
      throw wrong(words_.size() > count + 1 ? words_[count + 1].column : end_column(),
                  "expected " + usage + ", found " + std::to_string(words_.size() - 1) + " behind '" +
                      std::string(words_[0].text) + "'");
    }
  }
  // The number that a word is, rounded once, to the type it is kept in.
  template <typename T>
  [[nodiscard]] T number(std::size_t place, std::string const& what, NumberRange const& range) const {
    std::string_view const text = words_[place].text;
    T value{};
    auto const [end, error] = std::from_chars(text.data(), text.data() + text.size(), value);
    if (error != std::errc{} || end != text.data() + text.size() || !std::isfinite(value)) {
      throw wrong_word(place, "a number for " + what);
    }
    if (!range.contains(static_cast<double>(value))) {
      throw wrong_word(place, what + " " + range.text());
    }
    return value;
  }

 private:
  void close_word(std::size_t end) {
    std::string_view& word = words_.back().text;
    word = word.substr(0, end - static_cast<std::size_t>(word.data() - text_.data()));
  }
  [[nodiscard]] std::size_t end_column() const { return characters(text_.substr(0, code_end_)) + 1; }
  // Short enough to be read, and no character cut in two.
  [[nodiscard]] static std::string quoted(std::string_view text) {
    std::size_t end = text.size();
    if (end > 40) {
      for (end = 40; end > 0 && (static_cast<unsigned char>(text[end]) & 0xC0U) == 0x80U; --end) {
      }
    }
    return "'" + std::string(text.substr(0, end)) + (end < text.size() ? "...'" : "'");
  }

  std::string const* file_;
  std::size_t number_;
  std::string_view text_;
  std::size_t code_end_ = 0;  // of the last word
  std::vector<Cell> words_;
};

}  // namespace detail

}  // namespace wend::inline v0::lab
