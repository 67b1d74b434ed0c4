// Vectors, frames and poses against std::complex and Eigen's own geometry.
#include <algorithm>
#include <array>
#include <cmath>
#include <complex>
#include <cstddef>
#include <initializer_list>
#include <limits>
#include <random>

#include <doctest/doctest.h>
#include <Eigen/Geometry>

#include "numbers.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace {

using wend::Vec2;
using Complex = std::complex<double>;

static_assert(alignof(Vec2<float>) == 4 && sizeof(Vec2<float>) == 8);
static_assert(alignof(Vec2<double>) == 8 && sizeof(Vec2<double>) == 16);
static_assert(sizeof(wend::Pose<float>) == 16 && sizeof(wend::Polar<float>) == 12);
static_assert(sizeof(Vec2<wend::lab::Pack<8>>) == 2 * sizeof(wend::lab::Pack<8>));

// Numbers that a sum of two products of metres up to 10 can be off by: three roundings, each of half a unit of 100.
template <typename S>
constexpr double tolerance = 200.0 * static_cast<double>(std::numeric_limits<numbers::plain_t<S>>::epsilon());

// Another vector for each call and each lane, components in [-10, 10].
class Source {
 public:
  template <typename S>
  Vec2<S> vector() {
    S const x = numbers::make<S>([this](int) { return even(); });
    S const y = numbers::make<S>([this](int) { return even(); });
    return {x, y};
  }
  // A unit vector made by the C library, in double, and rounded.
  template <typename S>
  Vec2<S> unit() {
    std::array<double, 16> angle{};
    for (double& a : angle) {
      a = static_cast<double>(even());
    }
    S const x = numbers::make<S>([&](int k) { return std::cos(angle[static_cast<std::size_t>(k)]); });
    S const y = numbers::make<S>([&](int k) { return std::sin(angle[static_cast<std::size_t>(k)]); });
    return {x, y};
  }

 private:
  float even() { return static_cast<float>(random_() >> 8) * 0x1p-24F * 20.0F - 10.0F; }
  std::mt19937 random_{11};
};

template <wend::Number S>
Complex complex(Vec2<S> const& v, int k) {
  return {static_cast<double>(numbers::lane(v.x(), k)), static_cast<double>(numbers::lane(v.y(), k))};
}
template <wend::Number S>
double real(S const& x, int k) {
  return static_cast<double>(numbers::lane(x, k));
}

}  // namespace

// conj(a) b = a . b + i (a x b): the product of std::complex.
TEST_CASE_TEMPLATE("dot, cross, left_of, scaled and length agree with complex numbers", S, WEND_TEST_NUMBERS) {
  Source source;
  double worst = 0.0;
  for (int i = 0; i < 1000; ++i) {
    Vec2<S> const a = source.vector<S>();
    Vec2<S> const b = source.vector<S>();
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      Complex const z = complex(a, k);
      Complex const w = complex(b, k);
      Complex const product = std::conj(z) * w;
      worst = std::max({worst, std::abs(real(wend::dot(a, b), k) - product.real()),
                        std::abs(real(wend::cross(a, b), k) - product.imag()),
                        std::abs(complex(wend::left_of(a), k) - Complex(0, 1) * z),
                        std::abs(complex(wend::scaled(a, b.x()), k) - z * w.real()),
                        std::abs(real(wend::length(a), k) - std::abs(z))});
    }
  }
  CHECK(worst < tolerance<S>);
}

TEST_CASE_TEMPLATE("turned_out_of is Eigen's rotation, and turned_into is its inverse", S, WEND_TEST_NUMBERS) {
  Source source;
  double worst = 0.0;
  for (int i = 0; i < 1000; ++i) {
    Vec2<S> const heading = source.unit<S>();
    Vec2<S> const v = source.vector<S>();
    Vec2<S> const out = wend::turned_out_of(heading, v);
    Vec2<S> const in = wend::turned_into(heading, v);
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      Eigen::Rotation2D<double> const turn(std::arg(complex(heading, k)));
      Eigen::Vector2d const plain(real(v.x(), k), real(v.y(), k));
      Eigen::Vector2d const by_eigen = turn * plain;
      Eigen::Vector2d const back_by_eigen = turn.inverse() * plain;
      worst = std::max({worst, std::abs(complex(out, k) - Complex(by_eigen.x(), by_eigen.y())),
                        std::abs(complex(in, k) - Complex(back_by_eigen.x(), back_by_eigen.y())),
                        std::abs(complex(wend::turned_into(heading, out), k) - complex(v, k))});
    }
  }
  CHECK(worst < tolerance<S>);
}

TEST_CASE_TEMPLATE("into_frame and out_of_frame are Eigen's isometry and its inverse, and undo each other", S,
                   WEND_TEST_NUMBERS) {
  Source source;
  double worst = 0.0;
  for (int i = 0; i < 1000; ++i) {
    wend::Pose<S> const pose{source.vector<S>(), source.unit<S>()};
    Vec2<S> const point = source.vector<S>();
    Vec2<S> const there = wend::into_frame(pose, point);
    Vec2<S> const back = wend::out_of_frame(pose, there);
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      Complex const at = complex(pose.position, k);
      Eigen::Isometry2d const frame = Eigen::Translation2d(at.real(), at.imag()) *
                                      Eigen::Rotation2Dd(std::arg(complex(pose.heading, k)));
      Eigen::Vector2d const plain(real(point.x(), k), real(point.y(), k));
      Eigen::Vector2d const by_eigen = frame.inverse() * plain;
      worst = std::max({worst, std::abs(complex(there, k) - Complex(by_eigen.x(), by_eigen.y())),
                        std::abs(complex(back, k) - complex(point, k))});
    }
  }
  CHECK(worst < 2.0 * tolerance<S>);
}

// By hand: a machine at (1, 2) that looks along +y has a point 3 m ahead of it at (1, 5), and one 2 m to its left at
// (-1, 2).
TEST_CASE_TEMPLATE("x is forward and y is left in the frame of a pose", S, WEND_TEST_NUMBERS) {
  wend::Pose<S> const pose{{S(1.0F), S(2.0F)}, {S(0.0F), S(1.0F)}};
  Vec2<S> const ahead = wend::into_frame(pose, Vec2<S>(S(1.0F), S(5.0F)));
  Vec2<S> const left = wend::into_frame(pose, Vec2<S>(S(-1.0F), S(2.0F)));
  for (int k = 0; k < numbers::lanes<S>(); ++k) {
    CHECK(complex(ahead, k) == Complex(3.0, 0.0));
    CHECK(complex(left, k) == Complex(2.0 * 0.0, 2.0));
    CHECK(real(wend::cross(pose.heading, wend::left_of(pose.heading)), k) == 1.0);
  }
}

TEST_CASE_TEMPLATE("polar takes a vector apart at any length that single precision can square", S, WEND_TEST_NUMBERS) {
  Source source;
  double const epsilon = static_cast<double>(std::numeric_limits<numbers::plain_t<S>>::epsilon());
  double worst = 0.0;
  for (int power = -61; power <= 60; ++power) {  // 4e-19 to 1e18
    Vec2<S> const direction = source.unit<S>();
    Vec2<S> const v = wend::scaled(direction, S(std::ldexp(1.0F, power)));
    wend::Polar<S> const got = wend::polar(v);
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      Complex const z = complex(v, k);
      worst = std::max({worst, std::abs(real(got.length, k) / std::abs(z) - 1.0),
                        std::abs(complex(got.direction, k) - z / std::abs(z)),
                        std::abs(std::abs(complex(got.direction, k)) - 1.0)});
    }
  }
  // Squares, sum, root, division and product: each half a unit at the most, squares and sum halved by the root.
  CHECK(worst < 3.0 * epsilon);
}

TEST_CASE_TEMPLATE("polar gives a unit direction or none, however short the vector", S, WEND_TEST_NUMBERS) {
  using wend::finite;  // a guest's own is found by its type; the C library has a `finite` of its own to hide
  bool good = true;
  int none = 0;
  for (int power = -149; power <= -55; ++power) {
    float const size = std::ldexp(1.0F, power);
    wend::Polar<S> const got = wend::polar(Vec2<S>(S(0.6F * size), S(-0.8F * size)));
    double const unit = std::abs(complex(got.direction, 0));
    bool const nothing = unit == 0.0 && real(got.length, 0) <= static_cast<double>(wend::no_length);
    none += nothing ? 1 : 0;
    good = good && (nothing || (std::abs(unit - 1.0) < 1.0e-6 && real(got.length, 0) > 1.0e-19));
    good = good && numbers::all<S>(finite(got.length));
  }
  CHECK(good);
  CHECK(none == 149 - 63 + 1);  // up to 2^-63 = 1.08e-19, and nothing longer
}

TEST_CASE_TEMPLATE("polar of zero and of what is no number has no direction", S, WEND_TEST_NUMBERS) {
  float const nan = std::numeric_limits<float>::quiet_NaN();
  float const inf = std::numeric_limits<float>::infinity();
  wend::Polar<S> const zero = wend::polar(Vec2<S>(S(0.0F), S(-0.0F)));
  CHECK(complex(zero.direction, 0) == Complex(0.0, 0.0));
  CHECK(real(zero.length, 0) == 0.0);
  for (Vec2<S> const& v :
       {Vec2<S>(S(1.0F), S(nan)), Vec2<S>(S(nan), S(0.0F)), Vec2<S>(S(nan), S(nan)), Vec2<S>(S(inf), S(nan))}) {
    wend::Polar<S> const got = wend::polar(v);
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      CHECK(complex(got.direction, k) == Complex(0.0, 0.0));
      CHECK(std::isnan(real(got.length, k)));
    }
  }
}

// Squares of numbers over 1.8e19 (single) or 1.3e154 (double) overflow: the square root of the largest number.
TEST_CASE_TEMPLATE("a length that overflows is infinite, never a number that could be believed", S, WEND_TEST_NUMBERS) {
  using Own = std::numeric_limits<numbers::plain_t<S>>;
  S huge = S(1.0F);
  for (int doubling = 0; doubling < Own::max_exponent - 1; ++doubling) {
    huge = huge + huge;
  }
  for (Vec2<S> const& v : {Vec2<S>(huge, S(1.0F)), Vec2<S>(-huge, huge), Vec2<S>(S(0.0F), S(-huge))}) {
    wend::Polar<S> const got = wend::polar(v);
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      CHECK(std::isinf(real(got.length, k)));
      CHECK(complex(got.direction, k) == Complex(0.0, 0.0));  // one over infinity is 0
    }
  }
}

TEST_CASE_TEMPLATE("zero2, finite and select work on vectors lane by lane", S, WEND_TEST_NUMBERS) {
  CHECK(complex(wend::zero2<S>(), numbers::lanes<S>() - 1) == Complex(0.0, 0.0));
  float const inf = std::numeric_limits<float>::infinity();
  S const odd_is_bad = numbers::make<S>([inf](int k) { return k % 2 == 1 ? inf : 1.0F; });
  for (Vec2<S> const& v : {Vec2<S>(odd_is_bad, S(2.0F)), Vec2<S>(S(2.0F), odd_is_bad)}) {
    wend::mask_t<S> const sound = wend::finite(v);
    Vec2<S> const cleaned = wend::select(sound, v, wend::zero2<S>());
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      CHECK(numbers::holds(sound, k) == (k % 2 == 0));
      CHECK(numbers::same(numbers::lane(cleaned, k),
                          k % 2 == 0 ? numbers::lane(v, k) : wend::zero2<numbers::plain_t<S>>()));
    }
  }
}

TEST_CASE_TEMPLATE("a pose is sound when it is finite and its heading is a unit vector within one per cent", S,
                   WEND_TEST_NUMBERS) {
  auto const sound = [](float x, float y, float hx, float hy) {
    return numbers::all<S>(wend::sound(wend::Pose<S>{{S(x), S(y)}, {S(hx), S(hy)}}));
  };
  float const nan = std::numeric_limits<float>::quiet_NaN();
  float const inf = std::numeric_limits<float>::infinity();
  CHECK(numbers::all<S>(wend::sound(wend::Pose<S>{})));
  CHECK(sound(3.0F, -4.0F, 0.6F, 0.8F));
  CHECK(sound(1.0e6F, 0.0F, 0.0F, -1.0F));
  CHECK(sound(0.0F, 0.0F, 1.0099F, 0.0F));
  CHECK(sound(0.0F, 0.0F, 0.0F, 0.9900F));
  CHECK_FALSE(sound(0.0F, 0.0F, 1.0101F, 0.0F));
  CHECK_FALSE(sound(0.0F, 0.0F, 0.0F, 0.9899F));
  CHECK_FALSE(sound(0.0F, 0.0F, 0.0F, 0.0F));
  for (float const bad : {nan, inf, -inf}) {
    CHECK_FALSE(sound(bad, 0.0F, 1.0F, 0.0F));
    CHECK_FALSE(sound(0.0F, bad, 1.0F, 0.0F));
    CHECK_FALSE(sound(0.0F, 0.0F, bad, 0.0F));
    CHECK_FALSE(sound(0.0F, 0.0F, 1.0F, bad));
  }
}
