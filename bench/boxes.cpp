// bench/boxes.cpp - how many boxes of states a second a policy is evaluated over: on lab::Interval, and, where they are
// installed, with the same code on MPFI's intervals and on Boost.Interval's quickest.
//
// A box holds every position in a square from 1 mm to 0.3 m wide, every heading in a range, every reading of three
// discs in an error band, and every memory. All numbers decide the same boxes; before anything is timed, what they make
// of them has to overlap. Prints a table and, from the medians of the same interleaved repetitions, ratios.
//
// boxes             the table and the ratios; takes Google Benchmark's own options too
// boxes --once      one pass of each policy over the boxes on lab::Interval and nothing else, for callgrind
//
// MPFI: WEND_HAS_MPFI is defined and mpfi, mpfr and gmp are linked. Boost.Interval: its headers are found.
#include <algorithm>
#include <array>
#include <cfenv>
#include <cmath>
#include <cstdint>
#include <cstdio>
#include <limits>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include <benchmark/benchmark.h>

#include "../examples/policies.hpp"
#include "medians.hpp"
#include "wend/lab/heading_range.hpp"
#include "wend/lab/interval.hpp"
#include "wend/lab/random.hpp"
#include "wend/lab/trilean.hpp"
#include "wend/wend.hpp"

#ifdef WEND_HAS_MPFI
#include <mpfi.h>
#endif
#if __has_include(<boost/numeric/interval.hpp>)
#define WEND_BENCH_BOOST 1
#include <boost/numeric/interval.hpp>
#endif

namespace {

using wend::lab::Interval;
using wend::lab::Trilean;

#ifdef WEND_HAS_MPFI

/// An interval of MPFI with the precision of double, as a number a policy can run on.
class MpfiBox {
  // MPFI's functions give back a hint about exactness, of no use here.
  static void hint(int) noexcept {}

 public:
  MpfiBox() noexcept { mpfi_init2(x_, 53), hint(mpfi_set_ui(x_, 0)); }
  explicit MpfiBox(float x) noexcept { mpfi_init2(x_, 53), hint(mpfi_set_d(x_, static_cast<double>(x))); }
  MpfiBox(double low, double high) noexcept { mpfi_init2(x_, 53), hint(mpfi_interv_d(x_, low, high)); }
  MpfiBox(MpfiBox const& other) noexcept { mpfi_init2(x_, 53), hint(mpfi_set(x_, other.x_)); }
  MpfiBox(MpfiBox&& other) noexcept { mpfi_init2(x_, 53), mpfi_swap(x_, other.x_); }
  MpfiBox& operator=(MpfiBox const& other) noexcept { return hint(mpfi_set(x_, other.x_)), *this; }
  MpfiBox& operator=(MpfiBox&& other) noexcept { return mpfi_swap(x_, other.x_), *this; }
  ~MpfiBox() { mpfi_clear(x_); }

  static MpfiBox whole() noexcept {
    return {-std::numeric_limits<double>::infinity(), std::numeric_limits<double>::infinity()};
  }
  [[nodiscard]] double low() const noexcept { return mpfr_get_d(&x_->left, MPFR_RNDD); }
  [[nodiscard]] double high() const noexcept { return mpfr_get_d(&x_->right, MPFR_RNDU); }

  friend MpfiBox operator+(MpfiBox const& a, MpfiBox const& b) noexcept { return binary(mpfi_add, a, b); }
  friend MpfiBox operator-(MpfiBox const& a, MpfiBox const& b) noexcept { return binary(mpfi_sub, a, b); }
  friend MpfiBox operator*(MpfiBox const& a, MpfiBox const& b) noexcept { return binary(mpfi_mul, a, b); }
  friend MpfiBox operator/(MpfiBox const& a, MpfiBox const& b) noexcept { return binary(mpfi_div, a, b); }
  friend MpfiBox operator-(MpfiBox const& a) noexcept { return unary(mpfi_neg, a); }
  friend MpfiBox sqrt(MpfiBox const& a) noexcept { return unary(mpfi_sqrt, a); }
  friend MpfiBox sqr(MpfiBox const& a) noexcept { return unary(mpfi_sqr, a); }
  friend MpfiBox min(MpfiBox const& a, MpfiBox const& b) noexcept {
    MpfiBox r;
    mpfr_min(&r.x_->left, &a.x_->left, &b.x_->left, MPFR_RNDD);
    mpfr_min(&r.x_->right, &a.x_->right, &b.x_->right, MPFR_RNDU);
    return r;
  }
  friend MpfiBox max(MpfiBox const& a, MpfiBox const& b) noexcept {
    MpfiBox r;
    mpfr_max(&r.x_->left, &a.x_->left, &b.x_->left, MPFR_RNDD);
    mpfr_max(&r.x_->right, &a.x_->right, &b.x_->right, MPFR_RNDU);
    return r;
  }
  friend Trilean operator<(MpfiBox const& a, MpfiBox const& b) noexcept {
    return {mpfr_less_p(&a.x_->left, &b.x_->right) != 0, mpfr_less_p(&a.x_->right, &b.x_->left) == 0};
  }
  friend Trilean operator<=(MpfiBox const& a, MpfiBox const& b) noexcept { return !(b < a); }
  friend Trilean operator>(MpfiBox const& a, MpfiBox const& b) noexcept { return b < a; }
  friend Trilean operator>=(MpfiBox const& a, MpfiBox const& b) noexcept { return !(a < b); }
  friend MpfiBox select(Trilean m, MpfiBox const& a, MpfiBox const& b) noexcept {
    return m.surely() ? a : m.surely_not() ? b : binary(mpfi_union, a, b);
  }
  friend Trilean finite(MpfiBox const& a) noexcept {
    return mpfi_bounded_p(a.x_) != 0 ? Trilean::yes() : Trilean::both();
  }

 private:
  template <typename F>
  static MpfiBox binary(F const& f, MpfiBox const& a, MpfiBox const& b) noexcept {
    MpfiBox r;
    hint(f(r.x_, a.x_, b.x_));
    return r;
  }
  template <typename F>
  static MpfiBox unary(F const& f, MpfiBox const& a) noexcept {
    MpfiBox r;
    hint(f(r.x_, a.x_));
    return r;
  }

  mpfi_t x_;
};

#endif

#ifdef WEND_BENCH_BOOST

/// Boost.Interval at its quickest: the processor rounds upward throughout (whoever uses it sets that once), what has to
/// go down is negated, nothing is saved or checked.
class BoostBox {
  using Rounding = boost::numeric::interval_lib::save_state_nothing<boost::numeric::interval_lib::rounded_transc_exact<
      double, boost::numeric::interval_lib::rounded_arith_opp<double>>>;
  using Box = boost::numeric::interval<
      double, boost::numeric::interval_lib::policies<Rounding, boost::numeric::interval_lib::checking_base<double>>>;

 public:
  BoostBox() noexcept : x_(0.0) {}
  explicit BoostBox(float x) noexcept : x_(static_cast<double>(x)) {}
  BoostBox(double low, double high) noexcept : x_(low, high) {}

  static BoostBox whole() noexcept { return BoostBox(Box::whole()); }
  [[nodiscard]] double low() const noexcept { return x_.lower(); }
  [[nodiscard]] double high() const noexcept { return x_.upper(); }

  friend BoostBox operator+(BoostBox const& a, BoostBox const& b) noexcept { return BoostBox(a.x_ + b.x_); }
  friend BoostBox operator-(BoostBox const& a, BoostBox const& b) noexcept { return BoostBox(a.x_ - b.x_); }
  friend BoostBox operator*(BoostBox const& a, BoostBox const& b) noexcept { return BoostBox(a.x_ * b.x_); }
  friend BoostBox operator/(BoostBox const& a, BoostBox const& b) noexcept { return BoostBox(a.x_ / b.x_); }
  friend BoostBox operator-(BoostBox const& a) noexcept { return BoostBox(-a.x_); }
  friend BoostBox sqrt(BoostBox const& a) noexcept { return BoostBox(boost::numeric::sqrt(a.x_)); }
  friend BoostBox sqr(BoostBox const& a) noexcept { return BoostBox(boost::numeric::square(a.x_)); }
  friend BoostBox min(BoostBox const& a, BoostBox const& b) noexcept {
    return BoostBox(boost::numeric::min(a.x_, b.x_));
  }
  friend BoostBox max(BoostBox const& a, BoostBox const& b) noexcept {
    return BoostBox(boost::numeric::max(a.x_, b.x_));
  }
  friend Trilean operator<(BoostBox const& a, BoostBox const& b) noexcept {
    return {a.low() < b.high(), a.high() >= b.low()};
  }
  friend Trilean operator<=(BoostBox const& a, BoostBox const& b) noexcept { return !(b < a); }
  friend Trilean operator>(BoostBox const& a, BoostBox const& b) noexcept { return b < a; }
  friend Trilean operator>=(BoostBox const& a, BoostBox const& b) noexcept { return !(a < b); }
  friend BoostBox select(Trilean m, BoostBox const& a, BoostBox const& b) noexcept {
    return m.surely() ? a : m.surely_not() ? b : BoostBox(boost::numeric::hull(a.x_, b.x_));
  }
  friend Trilean finite(BoostBox const& a) noexcept {
    constexpr double infinity = std::numeric_limits<double>::infinity();
    return a.low() > -infinity && a.high() < infinity ? Trilean::yes() : Trilean::both();
  }

 private:
  explicit BoostBox(Box const& x) noexcept : x_(x) {}
  Box x_;
};

#endif

}  // namespace

namespace Eigen {

#ifdef WEND_HAS_MPFI
template <>
struct NumTraits<MpfiBox> : GenericNumTraits<MpfiBox> {
  enum {
    IsInteger = 0,
    IsSigned = 1,
    IsComplex = 0,
    RequireInitialization = 1,
    ReadCost = 2,
    AddCost = 50,
    MulCost = 50
  };
};
#endif
#ifdef WEND_BENCH_BOOST
template <>
struct NumTraits<BoostBox> : GenericNumTraits<BoostBox> {
  enum {
    IsInteger = 0,
    IsSigned = 1,
    IsComplex = 0,
    RequireInitialization = 1,
    ReadCost = 2,
    AddCost = 4,
    MulCost = 8
  };
};
#endif

}  // namespace Eigen

namespace {

constexpr int box_count = 4096;
constexpr int disc_count = 3;

template <typename S>
struct Box {
  wend::Pose<S> pose;
  wend::Vec2<S> goal{S(0.0F), S(0.0F)};
  wend::DiscSet<S, disc_count> discs;
};

template <typename S>
[[nodiscard]] S same_on(Interval const& x) {
  return S(x.low(), x.high());
}
template <typename S>
[[nodiscard]] wend::Vec2<S> same_on(wend::Vec2<Interval> const& v) {
  return {same_on<S>(v.x()), same_on<S>(v.y())};
}

// Three discs in a room of 5 m x 4 m: 0.1 to 0.4 m in radius, each
// 2 cm off either way.
std::vector<Box<Interval>> random_boxes() {
  wend::lab::Draws const draws(7, 0);
  std::vector<Box<Interval>> boxes;
  for (std::uint32_t k = 0; k < box_count; ++k) {
    auto const between = [&draws, k](double low, double high, std::uint32_t item) {
      return draws.between(low, high, {1, k, item});
    };
    Box<Interval> box;
    double const width = std::exp(between(std::log(0.001), std::log(0.3), 0));
    double const x = between(0.0, 5.0, 1);
    double const y = between(0.0, 4.0, 2);
    double const angle = between(-3.0, 3.0, 3);
    box.pose.position = {Interval(x, x + width), Interval(y, y + width)};
    box.pose.heading = wend::lab::headings_over(Interval(angle, angle + 3.0 * width));
    box.goal = {Interval(between(0.0, 5.0, 4)), Interval(between(0.0, 4.0, 5))};
    for (std::uint32_t i = 0; i < disc_count; ++i) {
      double const radius = between(0.1, 0.4, 12 + i);
      box.discs.add({{Interval(between(0.0, 5.0, 6 + i)), Interval(between(0.0, 4.0, 9 + i))},
                     Interval(radius - 0.02, radius + 0.02)});
    }
    boxes.push_back(box);
  }
  return boxes;
}

template <typename S>
std::vector<Box<S>> boxes_on(std::vector<Box<Interval>> const& boxes) {
  std::vector<Box<S>> others;
  for (Box<Interval> const& box : boxes) {
    Box<S> other;
    other.pose = {same_on<S>(box.pose.position), same_on<S>(box.pose.heading)};
    other.goal = same_on<S>(box.goal);
    for (wend::Disc<Interval> const& disc : box.discs) {
      other.discs.add({same_on<S>(disc.centre), same_on<S>(disc.radius)});
    }
    others.push_back(std::move(other));
  }
  return others;
}

template <typename S, typename T>
void forget(T& memory) {
  if constexpr (std::is_same_v<T, S>) {
    memory = S::whole();
  } else if constexpr (std::is_same_v<T, Trilean>) {
    memory = Trilean::both();
  } else if constexpr (std::is_same_v<T, wend::Vec2<S>>) {
    memory = {S::whole(), S::whole()};
  } else {
    wend::for_each_member(memory, memory, [](auto& member, auto&) { forget<S>(member); });
  }
}

template <typename S, typename Policy>
[[gnu::noinline, gnu::flatten]] wend::Course<S> decide(Policy const& policy, Box<S> const& box,
                                                       wend::memory_t<Policy, S> memory) noexcept {
  auto const percept = wend::look(box.pose, box.goal, box.discs, S(0.20F), S(0.05F));
  return wend::evaluate(policy, percept, memory);
}

template <typename S, typename Policy>
[[nodiscard]] wend::memory_t<Policy, S> any_memory() {
  wend::memory_t<Policy, S> memory;
  forget<S>(memory);
  return memory;
}

// Upward rounding, for as long as this lives, where S needs it.
template <typename S>
class RoundingFor {
 public:
#ifdef WEND_BENCH_BOOST
  static constexpr bool upward = std::is_same_v<S, BoostBox>;
#else
  static constexpr bool upward = false;
#endif
  RoundingFor() {
    if (upward) {
      std::fesetround(FE_UPWARD);
    }
  }
  ~RoundingFor() { std::fesetround(FE_TONEAREST); }
};

template <typename S, typename Policy>
void add(std::string const& name, Policy const& policy, std::vector<Box<S>> const& boxes) {
  benchmark::RegisterBenchmark(name.c_str(), [&policy, &boxes](benchmark::State& state) {
    RoundingFor<S> const rounding;
    auto const memory = any_memory<S, Policy>();
    for (auto _ : state) {
      for (Box<S> const& box : boxes) {
        auto course = decide(policy, box, memory);
        benchmark::DoNotOptimize(&course);
      }
    }
    state.SetItemsProcessed(state.iterations() * static_cast<std::int64_t>(boxes.size()));
  })->Unit(benchmark::kMicrosecond);
}

// On how many boxes two numbers give courses that have nothing in common. Both enclose the same, so that must be none.
template <typename S, typename Policy>
int disjoint(Policy const& policy, std::vector<Box<Interval>> const& boxes, std::vector<Box<S>> const& others) {
  auto const apart = [](Interval const& a, S const& b) { return a.high() < b.low() || b.high() < a.low(); };
  int count = 0;
  for (std::size_t k = 0; k < boxes.size(); ++k) {
    auto const a = decide(policy, boxes[k], any_memory<Interval, Policy>());
    RoundingFor<S> const rounding;
    auto const b = decide(policy, others[k], any_memory<S, Policy>());
    bool const off = apart(a.direction.x(), b.direction.x()) || apart(a.direction.y(), b.direction.y()) ||
                     apart(a.confidence, b.confidence);
    count += off ? 1 : 0;
  }
  return count;
}

template <typename F>
void for_each_policy(F const& f) {
  f("hard switch", policies::hard_switch);
  f("blend", policies::blended);
  f("composed", policies::composed);
}

}  // namespace

int main(int argc, char** argv) {
  auto const boxes = random_boxes();
  if (argc == 2 && std::string_view(argv[1]) == "--once") {
    for_each_policy([&boxes](char const*, auto const& policy) {
      for (Box<Interval> const& box : boxes) {
        auto course = decide(policy, box, any_memory<Interval, std::remove_cvref_t<decltype(policy)>>());
        benchmark::DoNotOptimize(&course);
      }
    });
    std::printf("%d boxes, three policies\n", box_count);
    return 0;
  }

  int apart = 0;
  for_each_policy([&boxes](char const* name, auto const& policy) {
    add<Interval>(std::string("interval/") + name, policy, boxes);
  });
#ifdef WEND_HAS_MPFI
  auto const mpfi_boxes = boxes_on<MpfiBox>(boxes);
  for_each_policy([&](char const* name, auto const& policy) {
    add<MpfiBox>(std::string("mpfi/") + name, policy, mpfi_boxes);
    apart += disjoint(policy, boxes, mpfi_boxes);
  });
#else
  std::printf("skipped: MPFI not found\n");
#endif
#ifdef WEND_BENCH_BOOST
  auto const boost_boxes = boxes_on<BoostBox>(boxes);
  for_each_policy([&](char const* name, auto const& policy) {
    add<BoostBox>(std::string("boost/") + name, policy, boost_boxes);
    apart += disjoint(policy, boxes, boost_boxes);
  });
#else
  std::printf("skipped: Boost.Interval not found\n");
#endif
  if (apart != 0) {
    std::fprintf(stderr, "on %d boxes two numbers enclose different courses: no timing\n", apart);
    return 1;
  }

  Medians medians;
  if (!medians.run(argc, argv)) {
    return 1;
  }

  std::printf("\n%-14s %18s %12s %13s\n", "", "million boxes / s", "times MPFI", "times Boost");
  for_each_policy([&medians](char const* name, auto const&) {
    double const own = medians.of(std::string("interval/") + name);
    double const mpfi = medians.of(std::string("mpfi/") + name);
    double const boost = medians.of(std::string("boost/") + name);
    if (own > 0.0) {
      std::printf("%-14s %18.2f", name, box_count / own);  // microseconds for all of them
      mpfi > 0.0 ? std::printf(" %12.1f", mpfi / own) : std::printf(" %12s", "-");
      boost > 0.0 ? std::printf(" %13.2f\n", boost / own) : std::printf(" %13s\n", "-");
    }
  });
  return 0;
}
