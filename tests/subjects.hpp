// tests/subjects.hpp - fields under test, behind one interface: so that each field is compiled once a number, and what
// is checked of it once for all of them.
#pragma once

#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <memory>
#include <string>
#include <tuple>
#include <type_traits>
#include <utility>
#include <vector>

#include "guests.hpp"
#include "numbers.hpp"
#include "scenes.hpp"
#include "wend/field.hpp"
#include "wend/lab/any_memory.hpp"
#include "wend/lab/dual.hpp"
#include "wend/lab/interval.hpp"

namespace subjects {

/// A policy with the name it is reported under, and how exactly its course turns and shifts with the scene.
template <typename Field>
struct Entry {
  char const* name;
  Field field;
  double turns_within = 1.0e-12;  ///< infinite where a parameter of the field is a place or a direction in the world
};
template <typename Field>
[[nodiscard]] constexpr Entry<Field> entry(char const* name, Field field, double turns_within = 1.0e-12) noexcept {
  return {name, field, turns_within};
}
template <typename Field>
[[nodiscard]] constexpr Entry<Field> entry_with_places(char const* name, Field field) noexcept {
  return {name, field, std::numeric_limits<double>::infinity()};
}

/// A field and what it remembers, on the number S.
template <wend::Number S>
class Subject {
 public:
  virtual ~Subject() = default;
  /// The same field with a fresh memory, or with a copy of this one's.
  [[nodiscard]] virtual std::unique_ptr<Subject> fresh() const = 0;
  [[nodiscard]] virtual std::unique_ptr<Subject> copy() const = 0;
  virtual void answer(scenes::Scene<S> const& scene, wend::Course<S>& course) = 0;
  /// All that is remembered in one lane, as bits.
  [[nodiscard]] virtual std::vector<std::uint64_t> remembered(int lane) const = 0;

  std::string name;
  double turns_within = 0.0;
};

/// A box of scenes beside plain ones in it: whether what is found on the box holds what is found on the points.
template <typename I>
class Enclosed {
 public:
  virtual ~Enclosed() = default;
  /// Starts anew: fresh, or with any memory at all.
  virtual void start(bool any_memory, guests::Random& random) = 0;
  virtual void tick(guests::Cloud<I> const& cloud, guests::Tally& tally) = 0;

  std::string name;
};

/// A field at a scene, differentiated by two of the scene's numbers.
class Sloped {
 public:
  using Values = std::array<double, 4>;
  virtual ~Sloped() = default;
  /// Starts anew, and lets it remember something.
  virtual void start(guests::Random& random) = 0;
  virtual void by_dual(guests::Row<double> const& row, std::size_t first, std::array<Values, 3>& found) const = 0;
  virtual void by_autodiff(guests::Row<double> const& row, std::size_t first, std::array<Values, 3>& found) const = 0;
  [[nodiscard]] virtual Values plain(guests::Row<double> const& row) const = 0;

  std::string name;
};

template <wend::Number S>
using Subjects = std::vector<std::unique_ptr<Subject<S>>>;
template <typename I>
using AllEnclosed = std::vector<std::unique_ptr<Enclosed<I>>>;
using AllSloped = std::vector<std::unique_ptr<Sloped>>;

namespace detail {

template <wend::Number S, typename Field>
class SubjectOf final : public Subject<S> {
 public:
  explicit SubjectOf(Entry<Field> const& entry) : field_(entry.field) {
    this->name = entry.name;
    this->turns_within = entry.turns_within;
  }
  [[nodiscard]] std::unique_ptr<Subject<S>> fresh() const override {
    auto other = std::make_unique<SubjectOf>(*this);
    other->memory_ = {};
    return other;
  }
  [[nodiscard]] std::unique_ptr<Subject<S>> copy() const override { return std::make_unique<SubjectOf>(*this); }
  void answer(scenes::Scene<S> const& scene, wend::Course<S>& course) override {
    course = scenes::answer(field_, scene, memory_);
  }
  [[nodiscard]] std::vector<std::uint64_t> remembered(int lane) const override {
    return scenes::bits_of<S>(memory_, lane);
  }

 private:
  Field field_;
  wend::memory_t<Field, S> memory_{};
};

template <typename I, typename Field>
class EnclosedOf final : public Enclosed<I> {
  using P = typename I::RoundedAs;

 public:
  explicit EnclosedOf(Entry<Field> const& entry) : field_(entry.field) { this->name = entry.name; }
  void start(bool any_memory, guests::Random& random) override {
    set_ = {};
    ones_.assign(guests::points_a_box, {});
    if (any_memory) {
      set_ = wend::lab::any_memory<Field, I>();
      for (auto& one : ones_) {
        guests::scramble(one, random);
      }
    }
  }
  void tick(guests::Cloud<I> const& cloud, guests::Tally& tally) override {
    wend::Course<I> const found = scenes::answer(field_, guests::scene_of(cloud.box), set_);
    ++tally.boxes;
    for (std::size_t k = 0; k < ones_.size(); ++k) {
      wend::Course<P> const one = scenes::answer(field_, guests::scene_of(cloud.points[k]), ones_[k]);
      tally.courses_out += guests::holds(found, one) ? 0 : 1;
      tally.memories_out += guests::holds(set_, ones_[k]) ? 0 : 1;
    }
  }

 private:
  Field field_;
  wend::memory_t<Field, I> set_{};
  std::vector<wend::memory_t<Field, P>> ones_;
};

template <typename Field>
class SlopedOf final : public Sloped {
 public:
  explicit SlopedOf(Entry<Field> const& entry) : field_(entry.field) { this->name = entry.name; }
  void start(guests::Random& random) override {
    memory_ = {};
    for (int tick = 0; tick < 5; ++tick) {
      static_cast<void>(scenes::answer(field_, guests::scene_of(random.row()), memory_));
    }
  }
  void by_dual(guests::Row<double> const& row, std::size_t first, std::array<Values, 3>& found) const override {
    by<wend::lab::Dual<2>>(row, first, found);
  }
  void by_autodiff(guests::Row<double> const& row, std::size_t first, std::array<Values, 3>& found) const override {
    by<guests::Auto>(row, first, found);
  }
  [[nodiscard]] Values plain(guests::Row<double> const& row) const override {
    wend::memory_t<Field, double> memory = memory_;
    return guests::numbers_of(scenes::answer(field_, guests::scene_of(row), memory));
  }

 private:
  // Values, and the slopes by the numbers of the row at `first` and behind it.
  template <typename S>
  void by(guests::Row<double> const& row, std::size_t first, std::array<Values, 3>& found) const {
    guests::Row<S> at = guests::converted<S>(row);
    at[first] = S::variable(row[first], 0);
    at[first + 1] = S::variable(row[first + 1], 1);
    wend::memory_t<Field, S> memory;
    guests::hand_over(memory_, memory);
    auto const numbers = guests::numbers_of(scenes::answer(field_, guests::scene_of(at), memory));
    for (std::size_t i = 0; i < numbers.size(); ++i) {
      found[0][i] = numbers[i].value();
      found[1][i] = numbers[i].slope(0);
      found[2][i] = numbers[i].slope(1);
    }
  }

  Field field_;
  wend::memory_t<Field, double> memory_{};
};

}  // namespace detail

/// A list's fields on the number S.
template <wend::Number S, typename... Fields>
[[nodiscard]] Subjects<S> on(std::tuple<Entry<Fields>...> const& list) {
  Subjects<S> all;
  std::apply([&all](auto const&... e) { (all.push_back(std::make_unique<detail::SubjectOf<S, Fields>>(e)), ...); },
             list);
  return all;
}

/// A list's fields on the intervals I, beside plain numbers.
template <typename I, typename... Fields>
[[nodiscard]] AllEnclosed<I> enclosed(std::tuple<Entry<Fields>...> const& list) {
  AllEnclosed<I> all;
  std::apply([&all](auto const&... e) { (all.push_back(std::make_unique<detail::EnclosedOf<I, Fields>>(e)), ...); },
             list);
  return all;
}

/// A list's fields, to be differentiated.
template <typename... Fields>
[[nodiscard]] AllSloped sloped(std::tuple<Entry<Fields>...> const& list) {
  AllSloped all;
  std::apply([&all](auto const&... e) { (all.push_back(std::make_unique<detail::SlopedOf<Fields>>(e)), ...); }, list);
  return all;
}

}  // namespace subjects
