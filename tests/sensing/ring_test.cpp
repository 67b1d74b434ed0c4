// Rings of range beams in worlds cast by the test itself, and under whatever readings a broken sensor can give.
#include <algorithm>
#include <array>
#include <bit>
#include <cmath>
#include <concepts>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <numbers>
#include <random>
#include <type_traits>
#include <vector>

#include <doctest/doctest.h>

#include "wend/sensing/ring.hpp"

namespace {

constexpr double pi = std::numbers::pi;
constexpr double infinity = std::numeric_limits<double>::infinity();

template <int Beams>
constexpr wend::Ring<Beams> all_round(float noise = 0.01F) {
  return {wend::even_bearings<Beams>(0.0, 2.0 * pi / Beams), 0.05F, 6.0F, noise};
}

// A ring lives in flash: it is a constant, and a plain one.
constexpr wend::Ring<360> fine = all_round<360>();
constexpr wend::Ring<8> coarse = all_round<8>();
static_assert(std::is_trivially_copyable_v<wend::Ring<8>> && std::is_aggregate_v<wend::Ring<8>>);

// Readings of one row, one a beam.
template <typename S, int Beams>
using Row = std::array<S, static_cast<std::size_t>(Beams)>;

struct Round {
  double x, y, radius;
};

// Distance along a ray from (x, y) to a circle, by the quadratic formula.
double cast(Round const& round, double x, double y, double angle) {
  double const b = (round.x - x) * std::cos(angle) + (round.y - y) * std::sin(angle);
  double const c = (round.x - x) * (round.x - x) + (round.y - y) * (round.y - y) - round.radius * round.radius;
  return b * b >= c && b > 0.0 ? b - std::sqrt(b * b - c) : infinity;
}

// The same to the wall x = `at`, between the y of its two ends.
double cast_wall(double at, double from, double to, double angle) {
  double const range = at / std::cos(angle);
  double const y = range * std::sin(angle);
  return range > 0.0 && y >= from && y <= to ? range : infinity;
}

// Ranges of Beams beams all round, from (x, y) with the first beam at `heading`. Beyond 6 m nothing comes back.
template <typename S, int Beams, typename Cast>
Row<S, Beams> row(Cast const& range_at, double heading = 0.0, double noise = 0.0, unsigned seed = 1) {
  std::mt19937 random(seed);
  std::normal_distribution<double> normal;
  Row<S, Beams> ranges{};
  for (std::size_t k = 0; k < Beams; ++k) {
    double const range = range_at(heading + static_cast<double>(k) * 2.0 * pi / Beams);
    ranges[k] = range < 6.0 ? static_cast<S>(range + noise * normal(random)) : std::numeric_limits<S>::infinity();
  }
  return ranges;
}

template <typename S, int Beams>
Row<S, Beams> row_of(std::vector<Round> const& world, double noise = 0.0, unsigned seed = 1) {
  return row<S, Beams>(
      [&](double angle) {
        double nearest = infinity;
        for (Round const& round : world) {
          nearest = std::min(nearest, cast(round, 0.0, 0.0, angle));
        }
        return nearest;
      },
      0.0, noise, seed);
}

template <typename S>
double reach(wend::Disc<S> const& disc, double x = 0.0, double y = 0.0) {
  return static_cast<double>(wend::gap(disc, wend::Vec2<S>(static_cast<S>(x), static_cast<S>(y))));
}

template <typename S, int Beams, int Capacity = 64>
wend::DiscSet<S, Capacity> see(wend::Ring<Beams> const& ring, std::type_identity_t<Row<S, Beams>> const& ranges) {
  wend::DiscSet<S, Capacity> discs;
  ring.discs(ranges, discs);
  return discs;
}

int total(wend::RingCount const& c) {
  return c.echoes + c.no_echo + c.not_a_number + c.infinite + c.zero + c.negative + c.too_near + c.too_far;
}

// Echoes of a post 5 cm wide, as three neighbouring beams at 2 degrees see it, with readings put between them.
std::array<float, 180> with_between(std::vector<float> const& between, std::size_t begin) {
  std::array<float, 180> ranges{};
  ranges.fill(std::numeric_limits<float>::infinity());
  ranges[begin % 180] = 1.0F;
  for (std::size_t i = 0; i < between.size(); ++i) {
    ranges[(begin + 1 + i) % 180] = between[i];
  }
  ranges[(begin + 1 + between.size()) % 180] = 1.0F;
  return ranges;
}

constexpr wend::Ring<180> half_fine = all_round<180>();
constexpr float not_a_number = std::numeric_limits<float>::quiet_NaN();
constexpr float nothing = std::numeric_limits<float>::infinity();

}  // namespace

TEST_CASE_TEMPLATE("360 beams find centre and radius of round things within a few sigma", S, float, double) {
  for (unsigned seed = 1; seed <= 200; ++seed) {
    double const radius = 0.3 + 0.001 * seed;
    std::vector<Round> const world{{1.5, 0.2, radius}, {-1.2, 0.9, 0.5}, {0.1, -1.4, 0.3}};
    wend::DiscSet<S, 64> const discs = see<S>(fine, row_of<S, 360>(world, 0.01, seed));
    CAPTURE(seed);
    REQUIRE(discs.size() == 3);
    for (Round const& round : world) {
      double best = infinity;
      double radius_off = infinity;
      for (wend::Disc<S> const& disc : discs) {
        double const off =
            std::hypot(static_cast<double>(disc.centre.x()) - round.x, static_cast<double>(disc.centre.y()) - round.y);
        radius_off = off < best ? std::abs(static_cast<double>(disc.radius) - round.radius) : radius_off;
        best = std::min(best, off);
      }
      CHECK(best < 0.04);  // four sigma
      CHECK(radius_off < 0.03);
    }
  }
}

TEST_CASE_TEMPLATE("8 beams are not joined to one another and keep the distance they measured", S, float, double) {
  wend::DiscSet<S, 64> const discs = see<S>(coarse, row_of<S, 8>({{0.0, 0.0, 0.0}, {1.5, 0.0, 0.4}, {0.0, 2.0, 0.3}}));
  REQUIRE(discs.size() == 2);
  for (wend::Disc<S> const& disc : discs) {
    bool const ahead = disc.centre.x() > S(0.5F);
    CHECK(reach(disc) == doctest::Approx(ahead ? 1.1 : 1.7).epsilon(0.02));
    CHECK(static_cast<double>(disc.radius) <= 0.5 * 0.4 + 0.02 + 1.0e-6);  // widest_disc, and two sigma
  }
  std::array<S, 8> room{};
  room.fill(static_cast<S>(1.0));
  wend::DiscSet<S, 64> const walls = see<S>(coarse, room);
  CHECK(walls.size() == 8);
  for (wend::Disc<S> const& disc : walls) {
    CHECK(reach(disc) == doctest::Approx(0.98));  // two sigma nearer than the echo
  }
}

TEST_CASE_TEMPLATE("a wall becomes a chain of small discs that stand out little and leave no way through", S, float,
                   double) {
  for (double const at : {0.5, 1.0, 2.0, 3.0}) {
    auto const ranges = row<S, 360>([&](double angle) { return cast_wall(at, -2.0, 2.0, angle); }, 0.0, 0.01);
    wend::DiscSet<S, 64> const discs = see<S>(fine, ranges);
    CAPTURE(at);
    CHECK(discs.size() >= 8);
    CHECK(discs.size() <= 24);
    CHECK(discs.dropped() == 0);
    for (wend::Disc<S> const& disc : discs) {
      CHECK(static_cast<double>(disc.radius) < 0.6 * 0.4 + 0.05);
      // 0.28 of the widest chord, two sigma of margin and three of the echoes themselves.
      CHECK(static_cast<double>(disc.centre.x() - disc.radius) > at - (0.283 * 0.4 + 0.05));
    }
    for (double y = -1.95; y <= 1.95; y += 0.01) {  // no hole between neighbours wider than the spacing of two echoes
      double nearest = infinity;
      for (wend::Disc<S> const& disc : discs) {
        nearest = std::min(nearest, reach(disc, at, y));
      }
      double const spacing = (at * at + y * y) / at * 2.0 * pi / 360.0;
      CHECK(nearest < 0.5 * spacing + 0.03);
    }
  }
}

TEST_CASE_TEMPLATE("a thing across the last and the first beam is one thing", S, float, double) {
  wend::DiscSet<S, 64> const astride = see<S>(fine, row_of<S, 360>({{1.5, 0.0, 0.4}}));
  REQUIRE(astride.size() == 1);
  CHECK(static_cast<double>(astride[0].centre.x()) == doctest::Approx(1.5).epsilon(0.002));
  CHECK(std::abs(static_cast<double>(astride[0].centre.y())) < 0.002);
  CHECK(static_cast<double>(astride[0].radius) == doctest::Approx(0.4).epsilon(0.005));
  // The same thing a quarter round, where no beam numbers meet.
  wend::DiscSet<S, 64> const aside = see<S>(fine, row_of<S, 360>({{0.0, 1.5, 0.4}}));
  REQUIRE(aside.size() == 1);
  CHECK(static_cast<double>(aside[0].centre.y()) == doctest::Approx(1.5).epsilon(0.002));
}

TEST_CASE("a fan does not close, however many its beams are") {
  // Half a ring, and a ring that lacks 8 beams of 180: what its two ends see is near enough to be joined, and is not.
  constexpr wend::Ring<90> fan{wend::even_bearings<90>(0.0, pi / 90.0), 0.05F, 6.0F, 0.01F};
  constexpr wend::Ring<172> most{wend::even_bearings<172>(0.0, pi / 90.0), 0.05F, 6.0F, 0.01F};
  std::array<float, 90> ends{};
  ends.fill(nothing);
  ends.front() = 0.06F;
  ends.back() = 0.06F;  // 0.12 m apart, within widest_gap
  CHECK(see<float>(fan, ends).size() == 2);
  std::array<float, 172> more{};
  more.fill(nothing);
  more.front() = 0.9F;
  more.back() = 0.9F;  // 0.28 m apart
  CHECK(see<float>(most, more).size() == 2);
  std::array<float, 180> whole{};
  whole.fill(nothing);
  whole.front() = 0.9F;
  whole.back() = 0.9F;
  CHECK(see<float>(half_fine, whole).size() == 1);
}

TEST_CASE("one or two broken readings in a thing are bridged, three are not") {
  for (std::size_t const begin : {std::size_t{50}, std::size_t{177}, std::size_t{178}, std::size_t{179}}) {
    CAPTURE(begin);
    CHECK(see<float>(half_fine, with_between({}, begin)).size() == 1);
    for (float const broken : {not_a_number, 0.0F, -0.0F, -nothing, -1.0F}) {
      CHECK(see<float>(half_fine, with_between({broken}, begin)).size() == 1);
      CHECK(see<float>(half_fine, with_between({broken, 0.0F}, begin)).size() == 1);
      CHECK(see<float>(half_fine, with_between({broken, 0.0F, not_a_number}, begin)).size() == 2);
    }
  }
}

TEST_CASE("a reading that says that nothing is there parts two things") {
  for (std::size_t const begin : {std::size_t{50}, std::size_t{177}, std::size_t{178}, std::size_t{179}}) {
    CAPTURE(begin);
    for (float const missing : {nothing, 6.5F, 1.0e30F, 0.01F}) {
      CHECK(see<float>(half_fine, with_between({missing}, begin)).size() == 2);
      CHECK(see<float>(half_fine, with_between({0.0F, missing}, begin)).size() == 2);
    }
  }
}

TEST_CASE("dropouts inside an arc leave the fitted circle where it is") {
  auto ranges = row_of<float, 360>({{1.5, 0.0, 0.4}}, 0.01, 5);
  for (std::size_t const k : {2U, 5U, 6U, 355U, 358U}) {
    ranges[k] = k % 2 == 0 ? 0.0F : not_a_number;
  }
  wend::DiscSet<float, 64> const discs = see<float>(fine, ranges);
  REQUIRE(discs.size() == 1);
  CHECK(std::abs(static_cast<double>(discs[0].centre.x()) - 1.5) < 0.03);
  CHECK(std::abs(static_cast<double>(discs[0].radius) - 0.4) < 0.03);
}

TEST_CASE("two things at different ranges are two, side by side or one before the other") {
  // 1.2 m and 2.4 m in neighbouring beams, where the nearer hides part of the farther.
  wend::DiscSet<float, 64> const discs = see<float>(fine, row_of<float, 360>({{1.5, 0.0, 0.3}, {2.7, 0.5, 0.4}}));
  REQUIRE(discs.size() >= 2);
  for (wend::Disc<float> const& disc : discs) {
    double const front = std::abs(reach(disc, 1.2, 0.0));
    double const back = std::abs(reach(disc, 2.7 - 0.4 * 0.983, 0.5 - 0.4 * 0.182));
    CHECK(std::min(front, back) < 0.1);
  }
}

TEST_CASE("a step in range that no flat surface makes at this beam spacing parts two things") {
  std::array<float, 360> ranges{};
  ranges.fill(nothing);
  ranges[40] = 0.75F;
  ranges[41] = 0.90F;  // a surface met at 10 degrees steps by 0.08 m here; 0.15 m is still within widest_gap
  CHECK(see<float>(fine, ranges).size() == 2);
  ranges[41] = 0.80F;
  CHECK(see<float>(fine, ranges).size() == 1);
}

TEST_CASE("a flat panel is not taken for a round thing, however the noise bends it") {
  constexpr wend::Ring<360> ring = all_round<360>(0.03F);
  for (unsigned seed = 1; seed <= 300; ++seed) {
    auto const ranges = row<float, 360>([](double a) { return cast_wall(1.2, -0.17, 0.17, a); }, 0.0, 0.03, seed);
    CAPTURE(seed);
    for (wend::Disc<float> const& disc : see<float>(ring, ranges)) {
      CHECK(static_cast<double>(disc.radius) < 0.36);
    }
  }
}

TEST_CASE("the corner of a box that points at the robot stays covered") {
  // Two faces at 45 degrees to the line of sight meet at (0.9, 0); a circle through both would leave the corner bare.
  auto const face = [](double a) {
    double const range = 0.9 / (std::cos(a) - std::abs(std::sin(a)));
    return range > 0.0 && range * std::cos(a) < 1.2 ? range : infinity;
  };
  for (unsigned seed = 1; seed <= 50; ++seed) {
    wend::DiscSet<float, 64> const discs = see<float>(fine, row<float, 360>(face, 0.0, 0.01, seed));
    double nearest = infinity;
    for (wend::Disc<float> const& disc : discs) {
      nearest = std::min(nearest, reach(disc, 0.9, 0.0));
    }
    CAPTURE(seed);
    CHECK(nearest < 0.01);
  }
}

TEST_CASE("more things than fit: the nearest are kept and the others counted") {
  std::array<float, 180> ranges{};
  ranges.fill(nothing);
  for (std::size_t i = 0; i < 40; ++i) {
    ranges[4 * i] = 1.0F + 0.1F * static_cast<float>((i * 7) % 40);
  }
  wend::DiscSet<float, 8> discs;
  wend::RingCount const count = half_fine.discs(ranges, discs);
  CHECK(count.echoes == 40);
  CHECK(discs.size() == 8);
  CHECK(discs.dropped() == 32);
  for (wend::Disc<float> const& disc : discs) {
    CHECK(reach(disc) < 1.0 + 0.1 * 8.0);
  }
}

TEST_CASE_TEMPLATE("a sensor that is mounted aside and turned shows the same world", S, float, double) {
  // The sensor sits at (0.2, -0.1) and looks 2 rad to the left; the world is given in the robot's frame.
  constexpr wend::Ring<360> turned{
      wend::even_bearings<360>(0.0, 2.0 * pi / 360.0), 0.05F, 6.0F, 0.01F, {0.2F, -0.1F, wend::bearing(2.0)}};
  Round const round{1.3, 0.7, 0.35};
  auto const ranges = row<S, 360>([&](double angle) { return cast(round, 0.2, -0.1, angle); }, 2.0);
  wend::DiscSet<S, 64> const discs = see<S>(turned, ranges);
  REQUIRE(discs.size() == 1);
  CHECK(static_cast<double>(discs[0].centre.x()) == doctest::Approx(1.3).epsilon(0.002));
  CHECK(static_cast<double>(discs[0].centre.y()) == doctest::Approx(0.7).epsilon(0.002));
  CHECK(static_cast<double>(discs[0].radius) == doctest::Approx(0.35).epsilon(0.005));
}

TEST_CASE("a ring whose beams run clockwise shows the same discs") {
  constexpr wend::Ring<180> clockwise{wend::even_bearings<180>(0.0, -2.0 * pi / 180.0), 0.05F, 6.0F, 0.01F};
  auto const ranges = row_of<float, 180>({{1.5, 0.05, 0.4}, {-2.0, 0.6, 0.1}, {0.3, -2.0, 0.15}}, 0.01);
  std::array<float, 180> mirrored{};
  for (std::size_t k = 0; k < 180; ++k) {
    mirrored[k] = ranges[(180 - k) % 180];
  }
  wend::DiscSet<float, 64> const one = see<float>(half_fine, ranges);
  wend::DiscSet<float, 64> const other = see<float>(clockwise, mirrored);
  REQUIRE(one.size() == 3);
  REQUIRE(other.size() == 3);
  for (wend::Disc<float> const& disc : one) {
    double best = infinity;
    for (wend::Disc<float> const& twin : other) {
      float const off = (disc.centre - twin.centre).norm() + std::abs(disc.radius - twin.radius);
      best = std::min(best, static_cast<double>(off));
    }
    CHECK(best < 0.002);
  }
}

TEST_CASE("every kind of reading is counted as what it is") {
  constexpr float tiny = std::numeric_limits<float>::denorm_min();
  wend::DiscSet<float, 8> discs;
  std::array<float, 8> const ranges{nothing, -nothing, not_a_number, -0.0F, -2.0F, tiny, 1.0F, 1.0e30F};
  wend::RingCount const count = coarse.discs(ranges, discs);
  CHECK(count.no_echo == 1);
  CHECK(count.infinite == 1);
  CHECK(count.not_a_number == 1);
  CHECK(count.zero == 1);
  CHECK(count.negative == 1);
  CHECK(count.too_near == 1);
  CHECK(count.echoes == 1);
  CHECK(count.too_far == 1);
  CHECK(count.alive() == 3);
  CHECK(discs.size() == 1);
}

TEST_CASE_TEMPLATE("the sign for no echo is compared by its bits before all else", S, float, double) {
  for (float const sign : {0.0F, -1.0F, not_a_number, nothing, 65.535F, 1.5F}) {
    wend::Ring<8> ring = coarse;
    ring.no_echo = sign;
    std::array<S, 8> ranges{};
    ranges.fill(static_cast<S>(sign));
    wend::DiscSet<S, 8> discs;
    wend::RingCount const count = ring.discs(ranges, discs);
    CAPTURE(sign);
    CHECK(count.no_echo == 8);
    CHECK(count.alive() == 8);
    CHECK(discs.size() == 0);
  }
  wend::Ring<8> ring = coarse;
  ring.no_echo = 0.0F;  // then infinity is an ordinary broken reading
  std::array<S, 8> ranges{};
  ranges.fill(std::numeric_limits<S>::infinity());
  wend::DiscSet<S, 8> discs;
  CHECK(ring.discs(ranges, discs).infinite == 8);
}

TEST_CASE("a dead sensor shows no disc and no beam alive") {
  for (float const dead : {not_a_number, 0.0F, -nothing, -3.0F}) {
    std::array<float, 180> ranges{};
    ranges.fill(dead);
    wend::DiscSet<float, 8> discs;
    CHECK(half_fine.discs(ranges, discs).alive() == 0);
    CHECK(discs.size() == 0);
  }
}

TEST_CASE("one beam alone, and two, and three, are rings too") {
  constexpr wend::Ring<1> one{wend::even_bearings<1>(0.5, 0.0), 0.05F, 6.0F, 0.01F};
  wend::DiscSet<float, 4> const discs = see<float, 1, 4>(one, {2.0F});
  REQUIRE(discs.size() == 1);
  CHECK(reach(discs[0]) == doctest::Approx(1.98));
  CHECK(static_cast<double>(discs[0].centre.y() / discs[0].centre.x()) == doctest::Approx(std::tan(0.5)));
  CHECK(see<float, 1, 4>(one, {not_a_number}).size() == 0);
  CHECK(see<float>(wend::Ring<2>{wend::even_bearings<2>(0.0, 0.03), 0.05F, 6.0F, 0.01F}, {1.0F, 1.0F}).size() == 1);
  CHECK(see<float>(wend::Ring<3>{wend::even_bearings<3>(0.0, 2.0 * pi / 3.0), 0.05F, 6.0F, 0.01F}, {1.0F, 1.0F, 1.0F})
            .size() == 3);
}

TEST_CASE_TEMPLATE("inside a round room, and in a corner, no disc reaches into the free space", S, float, double) {
  for (double const radius : {0.3, 0.6, 0.9, 2.0}) {
    auto const room = row<S, 360>([&](double) { return radius; }, 0.0, 0.01);
    wend::DiscSet<S, 64> const walls = see<S>(fine, room);
    CHECK(walls.size() > 12);
    for (wend::Disc<S> const& disc : walls) {
      CHECK(reach(disc) > radius - 0.15 * radius - 0.06);
      CHECK(static_cast<double>(disc.radius) < 0.6 * std::min(0.4, radius / 3.0) + 0.06);  // none is the room itself
    }
    auto const niche = row<S, 360>([&](double a) { return std::cos(a) > 0.2 ? radius : infinity; }, 0.0, 0.01);
    wend::DiscSet<S, 64> const hollow = see<S>(fine, niche);
    CHECK(hollow.size() > 6);
    for (wend::Disc<S> const& disc : hollow) {
      CHECK(static_cast<double>(disc.radius) < 0.6 * std::min(0.4, radius / 3.0) + 0.06);
    }
    auto const corner = row<S, 360>(
        [&](double a) { return std::min(cast_wall(radius, -9, 9, a), cast_wall(radius, -9, 9, a - 0.5 * pi)); }, 0.0,
        0.01);
    for (wend::Disc<S> const& disc : see<S>(fine, corner)) {
      CHECK(reach(disc) > radius - 0.3 * std::min(0.4, radius / 3.0) - 0.06);
    }
  }
}

TEST_CASE("no disc reaches into the robot's body unless an echo is in it") {
  // Echoes at 0.26 m all round and the default 0.25 m kept clear, with noise enough to make the margins larger.
  constexpr wend::Ring<180> ring = all_round<180>(0.05F);
  std::array<float, 180> ranges{};
  for (std::size_t k = 0; k < 180; ++k) {
    ranges[k] = 0.4F + 0.02F * static_cast<float>((k * 37) % 11);
  }
  for (wend::Disc<float> const& disc : see<float>(ring, ranges)) {
    CHECK(reach(disc) > 0.25 - 1.0e-5);
  }
}

TEST_CASE_TEMPLATE("whatever bits come in, every disc is finite, none covers the robot and all readings are counted", S,
                   float, double) {
  using Bits = std::conditional_t<std::same_as<S, double>, std::uint64_t, std::uint32_t>;
  std::mt19937_64 random(11);
  std::uniform_real_distribution<double> some(0.02, 7.0);
  int seen = 0;
  for (int trial = 0; trial < 20000; ++trial) {
    wend::Ring<24> ring = all_round<24>();
    if (trial % 3 == 2) {
      ring.mounting = {0.3F, -0.1F, wend::bearing(1.0)};
    }
    if (trial % 3 == 1) {  // parameters and limits may be nonsense as well; only where it sits must be known
      for (wend::Parameter* p : {&ring.min_range, &ring.max_range, &ring.noise, &ring.no_echo, &ring.widest_gap,
                                 &ring.widest_disc, &ring.largest_circle, &ring.kept_clear}) {
        *p = std::bit_cast<float>(static_cast<std::uint32_t>(random()));
      }
    }
    std::array<S, 24> ranges{};
    for (S& range : ranges) {
      std::uint64_t const bits = random();
      range = bits % 2 == 0 ? static_cast<S>(some(random)) : std::bit_cast<S>(static_cast<Bits>(bits));
    }
    wend::DiscSet<S, 32> discs;
    wend::RingCount const count = ring.discs(ranges, discs);
    double nearest = infinity;
    for (std::size_t k = 0; k < 24; ++k) {  // from the robot's origin, by polar coordinates
      double const r = static_cast<double>(ranges[k]);
      double const angle = static_cast<double>(k) * pi / 12.0 + (trial % 3 == 2 ? 1.0 : 0.0);
      double const away = std::hypot(static_cast<double>(ring.mounting.x) + r * std::cos(angle),
                                     static_cast<double>(ring.mounting.y) + r * std::sin(angle));
      nearest = r > 0.0 && r >= static_cast<double>(ring.min_range) ? std::min(nearest, away) : nearest;
    }
    REQUIRE(total(count) == 24);
    REQUIRE(discs.size() <= count.echoes);
    REQUIRE((discs.size() > 0) == (count.echoes > 0));
    REQUIRE_FALSE(discs.rejected());
    for (wend::Disc<S> const& disc : discs) {
      double const scale = static_cast<double>(disc.radius) + nearest;
      REQUIRE(reach(disc) >= 0.5 * nearest - 1.0e-6 * scale - 1.0e-18);  // below, squares vanish in single precision
      ++seen;
    }
  }
  CHECK(seen > 20000);
}

TEST_CASE("echoes so near that their squares vanish, and limits so far that they would overflow, are defined") {
  constexpr wend::Ring<180> open{wend::even_bearings<180>(0.0, 2.0 * pi / 180.0), 0.0F, nothing, 0.0F};
  std::array<float, 180> ranges{};
  for (float const value : {std::numeric_limits<float>::denorm_min(), 1.0e-30F, 1.0e5F, 1.0e30F}) {
    ranges.fill(value);
    wend::DiscSet<float, 256> discs;
    wend::RingCount const count = open.discs(ranges, discs);
    CAPTURE(value);
    CHECK(count.echoes == (value > 1.0e6F ? 0 : 180));
    CHECK(count.too_far == (value > 1.0e6F ? 180 : 0));
    CHECK_FALSE(discs.rejected());
    for (wend::Disc<float> const& disc : discs) {
      CHECK(wend::finite(disc.radius));
      CHECK(reach(disc) >= -1.0e-6);
    }
  }
}

TEST_CASE("a mounting that is not a number is found out as soon as there is an echo") {
  wend::Ring<8> ring = coarse;
  ring.mounting.x = not_a_number;
  std::array<float, 8> ranges{};
  ranges.fill(1.0F);
  CHECK(see<float>(ring, ranges).rejected());
}

TEST_CASE("two sensors add to one set") {
  wend::DiscSet<float, 8> discs;
  std::array<float, 8> ranges{};
  ranges.fill(nothing);
  ranges[0] = 1.0F;
  coarse.discs(ranges, discs);
  ranges[0] = nothing;
  ranges[4] = 1.5F;
  coarse.discs(ranges, discs);
  CHECK(discs.size() == 2);
}
