// wend/lab/account.hpp - lines of an explanation, and how numbers, courses and names are put in words.
#pragma once

#include <array>
#include <cmath>
#include <cstddef>
#include <cstdio>
#include <numbers>
#include <string>
#include <string_view>
#include <vector>

#include "wend/field.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// An explanation: lines that are indented as deep as what they tell is nested, and the fields whose courses went into
/// the outcome, in the order of the composition.
struct Account {
  std::vector<std::string> lines;  ///< each indented by two blanks a level, without its end
  std::vector<std::string> voices;  ///< names of the fields that were heard

  /// Adds a line, `depth` levels deep.
  void line(int depth, std::string const& text) {
    lines.push_back(std::string(2 * static_cast<std::size_t>(depth), ' ') + text);
  }
  /// All lines, each with its end.
  [[nodiscard]] std::string text() const {
    std::string all;
    for (std::string const& one : lines) {
      all += one + "\n";
    }
    return all;
  }
};

/// A number with three decimals, or six digits where it is 1000 or more; never -0.
template <PlainNumber S>
[[nodiscard]] std::string number_text(S const& x) {
  double const value = static_cast<double>(x);
  std::array<char, 40> text{};
  if (!finite(value)) {
    return "not a number";
  }
  std::snprintf(text.data(), text.size(), std::abs(value) < 1000.0 ? "%.3f" : "%.6g",
                std::abs(value) < 0.0005 ? 0.0 : value);
  return text.data();
}

/// How far a direction is off the nose: "+12.5 deg", to the left positive.
template <PlainNumber S>
[[nodiscard]] std::string off_the_nose(Vec2<S> const& direction, Vec2<S> const& nose) {
  double const angle =
      std::atan2(static_cast<double>(cross(nose, direction)), static_cast<double>(dot(nose, direction)));
  double const degrees = angle * 180.0 / std::numbers::pi;
  std::array<char, 40> text{};
  std::snprintf(text.data(), text.size(), "%+.1f deg", std::abs(degrees) < 0.05 ? 0.0 : degrees);
  return text.data();
}

/// A course in words: "+12.5 deg, confidence 1.000", and the share of the speed where that is not all.
template <PlainNumber S>
[[nodiscard]] std::string course_text(Course<S> const& course, Vec2<S> const& nose) {
  if (!(course.confidence > S(0.0F))) {
    return "no opinion";
  }
  std::string text = off_the_nose(course.direction, nose) + ", confidence " + number_text(course.confidence);
  if (course.speed_share < S(1.0F)) {
    text += ", share of the speed " + number_text(course.speed_share);
  }
  return text;
}

namespace detail {

// The name of a type without namespaces and template arguments, as compilers spell it in the name of a function.
template <typename Named>
std::string name_of_type() {
  std::string_view text = __PRETTY_FUNCTION__;
  text.remove_prefix(text.find("Named = ") + 8);
  std::size_t end = 0;
  std::size_t start = 0;
  while (end < text.size() && text[end] != '<' && text[end] != ';' && text[end] != ']') {
    end += 1;
    start = text[end - 1] == ':' ? end : start;
  }
  return std::string(text.substr(start, end - start));
}

}  // namespace detail

/// What a field, guard or signal is called in an explanation: the name of its type.
template <typename F>
[[nodiscard]] std::string name_of(F const&) {
  return detail::name_of_type<F>();
}

}  // namespace wend::inline v0::lab
