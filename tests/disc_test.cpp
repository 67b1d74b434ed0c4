// Discs, rays to them, and the set that keeps the nearest ones.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <initializer_list>
#include <limits>
#include <random>
#include <utility>
#include <vector>

#include <doctest/doctest.h>

#include "numbers.hpp"
#include "wend/disc.hpp"
#include "wend/number.hpp"
#include "wend/plane.hpp"

namespace {

using wend::Disc;
using wend::Vec2;
using Wide = long double;
template <typename P>
constexpr Wide wide(P x) {
  return static_cast<Wide>(x);
}
constexpr Wide missed = wide(wend::far_away);

static_assert(sizeof(Disc<float>) == 12 && sizeof(Disc<double>) == 24);
static_assert(sizeof(wend::DiscSet<float, 8>) == 8 * 12 + 12, "discs, two counts and a flag: no holes beyond its end");
static_assert(wend::DiscSet<float, 5>::capacity() == 5);

constexpr float not_a_number = std::numeric_limits<float>::quiet_NaN();
constexpr float infinite = std::numeric_limits<float>::infinity();

// Where a ray first meets a circle, by the textbook: the lesser root of t^2 - 2 t (d.c) + c.c - r^2 = 0 in extended
// precision, in the numerically stable form of Press et al., Numerical Recipes, 5.6 (from memory). Far away on a miss.
struct Root {
  Wide reach;
  Wide discriminant;  // of the halved equation, over the squared radius: 0 on a tangent
};
template <typename P>
Root by_quadratic(Vec2<P> const& origin, Vec2<P> const& direction, Disc<P> const& disc) {
  Wide const x = wide(disc.centre.x()) - wide(origin.x()), y = wide(disc.centre.y()) - wide(origin.y());
  Wide const r = wide(disc.radius), dx = wide(direction.x()), dy = wide(direction.y());
  Wide const a = dx * dx + dy * dy, half_b = -(dx * x + dy * y), c = x * x + y * y - r * r;
  Wide const discriminant = half_b * half_b - a * c;
  Wide const relative = discriminant / (r * r);
  if (c <= 0) {
    return {0, relative};  // the ray starts inside
  }
  if (discriminant < 0 || half_b > 0) {
    return {missed, relative};
  }
  return {c / (-half_b + std::sqrt(discriminant)), relative};
}

class Source {
 public:
  explicit Source(unsigned seed) : random_(seed) {}
  float even(float low, float high) { return low + (high - low) * static_cast<float>(random_() >> 8) * 0x1p-24F; }
  template <typename S>
  S number(float low, float high) {
    return numbers::make<S>([&](int) { return even(low, high); });
  }
  template <typename S>
  Disc<S> disc(float reach) {
    S const x = number<S>(-reach, reach);
    S const y = number<S>(-reach, reach);
    return {{x, y}, number<S>(0.05F, 1.5F)};
  }
  template <typename S>
  Vec2<S> unit() {
    std::array<double, 16> angle{};
    for (double& a : angle) {
      a = static_cast<double>(even(-4.0F, 4.0F));
    }
    S const x = numbers::make<S>([&](int k) { return std::cos(angle[static_cast<std::size_t>(k)]); });
    S const y = numbers::make<S>([&](int k) { return std::sin(angle[static_cast<std::size_t>(k)]); });
    return {x, y};
  }
  std::mt19937& random() { return random_; }

 private:
  std::mt19937 random_;
};

template <wend::Number S>
Disc<numbers::plain_t<S>> lane(Disc<S> const& disc, int k) {
  return {numbers::lane(disc.centre, k), numbers::lane(disc.radius, k)};
}
template <typename P>
bool same(Disc<P> const& a, Disc<P> const& b) {
  return numbers::same(a.centre, b.centre) && numbers::same(a.radius, b.radius);
}
template <wend::Number S>
double real(S const& x, int k = 0) {
  return static_cast<double>(numbers::lane(x, k));
}
template <typename S>
Disc<S> disc_at(float x, float y, float r) {
  return {{S(x), S(y)}, S(r)};
}
template <typename S>
double ray(float ox, float oy, float dx, float dy, Disc<S> const& disc) {
  return real(wend::ray_to_disc(Vec2<S>(S(ox), S(oy)), Vec2<S>(S(dx), S(dy)), disc));
}
template <typename P>
Wide exact_gap(Disc<P> const& disc, Vec2<P> const& from) {
  return std::hypot(wide(disc.centre.x()) - wide(from.x()), wide(disc.centre.y()) - wide(from.y())) - wide(disc.radius);
}

// A set of random discs, some of them not sound when `spoilt`, as one number S sees it and as each lane alone does.
template <typename S, int Capacity>
struct Filled {
  using P = numbers::plain_t<S>;
  wend::DiscSet<S, Capacity> set;
  std::vector<wend::DiscSet<P, Capacity>> alone{static_cast<std::size_t>(numbers::lanes<S>())};

  Filled(int count, unsigned seed, bool spoilt) {
    Source source(seed);
    for (int i = 0; i < count; ++i) {
      Disc<S> disc = source.disc<S>(8.0F);
      if (spoilt && i % 3 == 1) {
        disc.radius = numbers::make<S>([i](int k) { return k == i % 4 ? (i % 2 == 0 ? not_a_number : -0.5F) : 0.5F; });
      }
      Vec2<S> const viewpoint{source.number<S>(-1.0F, 1.0F), S(0.25F)};
      set.add(disc, viewpoint);
      for (int k = 0; k < numbers::lanes<S>(); ++k) {
        alone[static_cast<std::size_t>(k)].add(lane(disc, k), numbers::lane(viewpoint, k));
      }
    }
  }
};

}  // namespace

TEST_CASE_TEMPLATE("gap is the distance to the edge, negative inside", S, WEND_TEST_NUMBERS) {
  Vec2<S> const from{S(3.0F), S(4.0F)};  // 3-4-5: exact
  CHECK(real(wend::gap(disc_at<S>(0.0F, 0.0F, 2.0F), from)) == 3.0);
  CHECK(real(wend::gap(disc_at<S>(0.0F, 0.0F, 5.0F), from)) == 0.0);
  CHECK(real(wend::gap(disc_at<S>(3.0F, 4.0F, 1.5F), from)) == -1.5);
  Source source(1);
  double worst = 0.0;
  for (int i = 0; i < 1000; ++i) {
    Disc<S> const disc = source.disc<S>(10.0F);
    S const got = wend::gap(disc, from);
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      double const by_hypot = std::hypot(real(disc.centre.x(), k) - 3.0, real(disc.centre.y(), k) - 4.0);
      worst = std::max(worst, std::abs(real(got, k) - (by_hypot - real(disc.radius, k))));
    }
  }
  // Metres up to 20: the differences, the length and the last subtraction are each off by half a unit of 16.
  CHECK(worst < 64.0 * static_cast<double>(std::numeric_limits<numbers::plain_t<S>>::epsilon()));
}

TEST_CASE_TEMPLATE("ray_to_disc agrees with the quadratic formula on random rays", S, WEND_TEST_NUMBERS) {
  using P = numbers::plain_t<S>;
  Source source(2);
  int hits = 0, misses = 0, inside = 0, wrong = 0;
  double worst = 0.0;
  for (int i = 0; i < 20000; ++i) {
    Vec2<S> const origin{source.number<S>(-4.0F, 4.0F), source.number<S>(-4.0F, 4.0F)};
    Vec2<S> const direction = source.unit<S>();
    Disc<S> const disc = source.disc<S>(4.0F);
    S const got = wend::ray_to_disc(origin, direction, disc);
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      Disc<P> const one = lane(disc, k);
      Root const expected = by_quadratic(numbers::lane(origin, k), numbers::lane(direction, k), one);
      Wide const edge = std::abs(exact_gap(one, numbers::lane(origin, k)));
      if (std::abs(expected.discriminant) < 1.0e-2L || edge < 1.0e-4L) {
        continue;  // so near a tangent or the edge, rounding decides between a hit and a miss: tested by themselves
      }
      (expected.reach == 0 ? inside : expected.reach < missed ? hits : misses) += 1;
      wrong += (expected.reach == missed) != (real(got, k) == real(S(wend::far_away), k)) ? 1 : 0;
      wrong += (expected.reach == 0) != (real(got, k) == 0.0) ? 1 : 0;
      worst = std::max(worst, std::abs(real(got, k) - static_cast<double>(expected.reach)));
    }
  }
  CHECK(wrong == 0);
  CHECK(hits > 1000);
  CHECK(misses > 1000);
  CHECK(inside > 100);
  // The square of the half chord is off by some 4 roundings of across^2 + 2 across |c| (|c| up to 11), and its root by
  // that over twice the half chord, which is a tenth of the radius or more here.
  CHECK(worst < 1000.0 * static_cast<double>(std::numeric_limits<P>::epsilon()));
}

// The definition, without any algebra: walk along the ray until a point lies in the disc.
TEST_CASE_TEMPLATE("ray_to_disc finds what marching along the ray finds", S, float, double) {
  Source source(3);
  constexpr double step = 1.0e-3;
  int wrong = 0, compared = 0;
  for (int i = 0; i < 300; ++i) {
    Vec2<S> const direction = source.unit<S>();
    Disc<S> const disc = source.disc<S>(3.0F);
    double const got = real(wend::ray_to_disc(wend::zero2<S>(), direction, disc));
    double marched = real(S(wend::far_away));
    for (int n = 0; n <= 6000; ++n) {
      double const t = n * step;
      if (std::hypot(t * real(direction.x()) - real(disc.centre.x()),
                     t * real(direction.y()) - real(disc.centre.y())) <= real(disc.radius)) {
        marched = t;
        break;
      }
    }
    bool const both_hit = got < 6.0 && marched < 6.0;
    compared += both_hit ? 1 : 0;
    // Between two steps the march may jump over a chord shorter than a step, and nothing else.
    double const across = std::abs(real(wend::cross(direction, disc.centre)));
    bool const sliver = std::abs(across - real(disc.radius)) < step;
    wrong += sliver || (both_hit ? std::abs(marched - got) <= 1.01 * step : got >= 6.0 && marched >= 6.0) ? 0 : 1;
  }
  CHECK(wrong == 0);
  CHECK(compared > 50);
}

TEST_CASE_TEMPLATE("ray_to_disc knows the tangent, the inside, the edge, behind and beside", S, WEND_TEST_NUMBERS) {
  double const miss = real(S(wend::far_away));
  Disc<S> const disc = disc_at<S>(3.0F, 0.0F, 1.0F);
  CHECK(ray(0.0F, 0.0F, 1.0F, 0.0F, disc) == 2.0);
  CHECK(ray(0.0F, 1.0F, 1.0F, 0.0F, disc) == 3.0);  // tangent, exact in these numbers
  CHECK(ray(0.0F, -1.0F, 1.0F, 0.0F, disc) == 3.0);
  CHECK(ray(0.0F, std::nextafter(1.0F, 2.0F), 1.0F, 0.0F, disc) == miss);
  CHECK(ray(3.0F, 0.0F, 0.6F, 0.8F, disc) == 0.0);  // at the centre
  CHECK(ray(3.5F, 0.25F, 1.0F, 0.0F, disc) == 0.0);  // inside, looking out
  CHECK(ray(2.0F, 0.0F, 1.0F, 0.0F, disc) == 0.0);  // on the edge, looking in
  CHECK(ray(4.0F, 0.0F, 1.0F, 0.0F, disc) == 0.0);  // on the edge, looking out: touching is a hit
  CHECK(ray(5.0F, 0.0F, 1.0F, 0.0F, disc) == miss);  // behind
  CHECK(ray(0.0F, 0.0F, -1.0F, 0.0F, disc) == miss);
  CHECK(ray(0.0F, 2.0F, 1.0F, 0.0F, disc) == miss);  // beside
  CHECK(ray(0.0F, 0.0F, 0.0F, 1.0F, disc) == miss);
  CHECK(ray(0.0F, 0.0F, 1.0F, 0.0F, disc_at<S>(4.0F, 0.0F, 0.0F)) == 4.0);  // a point in the way
  CHECK(ray(0.0F, 0.0F, 1.0F, 0.0F, Disc<S>{}) >= 0.5 * miss);  // the disc that stands for none
}

TEST_CASE_TEMPLATE("a set keeps the nearest discs in whatever order they come, and counts the rest", S, float, double) {
  constexpr int capacity = 6;
  Source source(4);
  int wrong = 0;
  for (int round = 0; round < 200; ++round) {
    int const count = 1 + round % 20;
    Vec2<float> const viewpoint{source.even(-3.0F, 3.0F), source.even(-3.0F, 3.0F)};
    std::vector<Disc<float>> all;
    for (int i = 0; i < count; ++i) {
      all.push_back(source.disc<float>(10.0F));
    }
    std::vector<Disc<float>> nearest = all;
    std::sort(nearest.begin(), nearest.end(), [&](Disc<float> const& a, Disc<float> const& b) {
      return exact_gap(a, viewpoint) < exact_gap(b, viewpoint);
    });
    nearest.resize(std::min(nearest.size(), static_cast<std::size_t>(capacity)));
    for (int order = 0; order < 5; ++order) {
      wend::DiscSet<S, capacity> set;
      for (Disc<float> const& d : all) {
        set.add({d.centre.cast<S>(), S(d.radius)}, viewpoint.cast<S>());
      }
      wrong += set.size() == std::min(count, capacity) && set.dropped() == std::max(0, count - capacity) ? 0 : 1;
      wrong += set.rejected() ? 1 : 0;
      for (Disc<float> const& d : nearest) {
        wrong += std::count_if(set.begin(), set.end(),
                               [&d](Disc<S> const& kept) {
                                 return kept.centre == d.centre.cast<S>() && kept.radius == S(d.radius);
                               }) == 1
                     ? 0
                     : 1;
      }
      std::shuffle(all.begin(), all.end(), source.random());
    }
  }
  CHECK(wrong == 0);
}

TEST_CASE_TEMPLATE("a set starts empty, keeps the order while there is room, and drops by gap and not by centre", S,
                   WEND_TEST_NUMBERS) {
  wend::DiscSet<S, 2> set;
  CHECK(set.size() == 0);
  CHECK(set.dropped() == 0);
  CHECK(set.begin() == set.end());
  CHECK(numbers::none<S>(set.rejected()));
  set.add(disc_at<S>(2.0F, 0.0F, 0.5F));
  set.add(disc_at<S>(1.0F, 0.0F, 0.1F));
  CHECK(real(set[0].centre.x()) == 2.0);
  CHECK(real(set[1].centre.x()) == 1.0);
  set.add(disc_at<S>(6.0F, 0.0F, 5.5F));  // its centre is the farthest, its edge the nearest
  CHECK(set.size() == 2);
  CHECK(set.dropped() == 1);
  std::array<double, 2> x{real(set[0].centre.x()), real(set[1].centre.x())};
  std::sort(x.begin(), x.end());
  CHECK(x[0] == 1.0);
  CHECK(x[1] == 6.0);
}

TEST_CASE_TEMPLATE("a disc that cannot be one is put far away and flagged", S, WEND_TEST_NUMBERS) {
  for (Disc<S> const& bad :
       {disc_at<S>(not_a_number, 0.0F, 1.0F), disc_at<S>(0.0F, not_a_number, 1.0F),
        disc_at<S>(0.0F, 0.0F, not_a_number), disc_at<S>(infinite, 0.0F, 1.0F), disc_at<S>(0.0F, -infinite, 1.0F),
        disc_at<S>(0.0F, 0.0F, infinite), disc_at<S>(0.0F, 0.0F, -infinite), disc_at<S>(0.0F, 0.0F, -1.0e-30F)}) {
    wend::DiscSet<S, 2> set;
    set.add(disc_at<S>(1.0F, 1.0F, 0.0F));  // a point is a disc
    CHECK(numbers::none<S>(set.rejected()));
    set.add(bad);
    CHECK(numbers::all<S>(set.rejected()));
    CHECK(set.size() == 2);
    CHECK(real(wend::gap(set[1], wend::zero2<S>())) == real(S(wend::far_away)));
    set.add(disc_at<S>(2.0F, 2.0F, 0.5F));  // what is far away gives way, and the flag stays
    CHECK(real(set[1].radius) == 0.5);
    CHECK(real(set[0].centre.x()) == 1.0);
    CHECK(numbers::all<S>(set.rejected()));
    set.add(bad);
    CHECK(real(set[1].radius) == 0.5);
    CHECK(real(set[0].centre.x()) == 1.0);
  }
}

TEST_CASE_TEMPLATE("a set on lanes holds in each lane what that machine's own set holds", S, wend::lab::Pack<4>,
                   wend::lab::Pack<8>) {
  for (unsigned seed = 0; seed < 60; ++seed) {
    Filled<S, 5> const filled(static_cast<int>(seed % 13), seed, seed % 2 == 0);
    bool good = true;
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      auto const& alone = filled.alone[static_cast<std::size_t>(k)];
      good = good && alone.size() == filled.set.size() && alone.dropped() == filled.set.dropped() &&
             alone.rejected() == numbers::holds(filled.set.rejected(), k);
      for (int i = 0; i < alone.size(); ++i) {
        good = good && same(alone[i], lane(filled.set[i], k));
      }
    }
    CHECK(good);
  }
}

TEST_CASE_TEMPLATE("ray_to_disc on lanes gives the bits of each ray alone", S, wend::lab::Pack<4>, wend::lab::Pack<8>) {
  Source source(9);
  int wrong = 0;
  for (int i = 0; i < 2000; ++i) {
    Vec2<S> const origin{source.number<S>(-4.0F, 4.0F), source.number<S>(-4.0F, 4.0F)};
    Vec2<S> const direction = source.unit<S>();
    Disc<S> const disc = source.disc<S>(4.0F);
    S const got = wend::ray_to_disc(origin, direction, disc);
    for (int k = 0; k < numbers::lanes<S>(); ++k) {
      float const alone = wend::ray_to_disc(numbers::lane(origin, k), numbers::lane(direction, k), lane(disc, k));
      wrong += numbers::same(got[k], alone) ? 0 : 1;
    }
  }
  CHECK(wrong == 0);
}
