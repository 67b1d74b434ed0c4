// Votes: Rosenblatt (1997), DAMN: a distributed architecture for mobile navigation, J. Experimental and Theoretical
// Artificial Intelligence 9:339-360 (from memory): every behaviour votes on every candidate, votes are weighted and
// added, and the candidate with the most of them is taken. Here against adding the votes up by angles, with the C
// library.
#include <array>
#include <cmath>
#include <cstddef>
#include <numbers>
#include <random>

#include <doctest/doctest.h>

#include "../scenes.hpp"
#include "wend/arbiters/blend.hpp"
#include "wend/arbiters/vote.hpp"

namespace {

using scenes::told;

constexpr double pi = std::numbers::pi;

}  // namespace

TEST_CASE("the candidate with the most votes wins, counted by angles") {
  constexpr int count = 24;
  std::mt19937 random(3);
  std::uniform_real_distribution<float> any(-1.0F, 1.0F);
  std::uniform_real_distribution<float> sure(0.1F, 1.0F);
  for (int k = 0; k < 500; ++k) {
    std::array<told, 3> const fields{{{any(random), any(random), sure(random), sure(random)},
                                      {any(random), any(random), sure(random), sure(random)},
                                      {any(random), any(random), sure(random), sure(random)}}};
    std::array<float, 3> const weights{sure(random), sure(random), sure(random)};
    double const nose = 3.0 * static_cast<double>(any(random));
    scenes::Scene<double> scene;
    scene.pose.heading = {std::cos(nose), std::sin(nose)};
    std::array<double, count> votes{};
    std::array<double, count> speeds{};  // shares of the speed, each times its vote
    double possible = 0.0;
    for (std::size_t f = 0; f < 3; ++f) {
      possible += static_cast<double>(weights[f]);
      double const wants = std::atan2(static_cast<double>(fields[f].y), static_cast<double>(fields[f].x));
      for (std::size_t c = 0; c < count; ++c) {
        double const rating =
            std::pow((1.0 + std::cos(nose + 2.0 * pi * static_cast<double>(c) / count - wants)) / 2.0, 4);
        double const vote = static_cast<double>(weights[f]) * static_cast<double>(fields[f].confidence) * rating;
        votes[c] += vote;
        speeds[c] += vote * static_cast<double>(fields[f].speed_share);
      }
    }
    std::size_t best = 0;
    for (std::size_t c = 1; c < count; ++c) {
      best = votes[c] > votes[best] ? c : best;
    }
    auto const course =
        scenes::answer(wend::vote<count>(wend::share(weights[0], fields[0]), wend::share(weights[1], fields[1]),
                                         wend::share(weights[2], fields[2])),
                       scene);
    double const angle = nose + 2.0 * pi * static_cast<double>(best) / count;
    CHECK((course.direction - wend::Vec2<double>(std::cos(angle), std::sin(angle))).norm() < 1e-6);
    CHECK(course.confidence == doctest::Approx(votes[best] / possible).epsilon(1e-6));
    CHECK(course.speed_share == doctest::Approx(speeds[best] / votes[best]).epsilon(1e-6));
  }
}

TEST_CASE("two that nearly agree are averaged, and of two that are at odds the heavier wins") {
  scenes::Scene<double> scene;
  auto const degrees = [&scene](double a, double b, float heavier) {
    told const first{static_cast<float>(std::cos(a * pi / 180.0)), static_cast<float>(std::sin(a * pi / 180.0))};
    told const second{static_cast<float>(std::cos(b * pi / 180.0)), static_cast<float>(std::sin(b * pi / 180.0))};
    auto const course = scenes::answer(wend::vote<360>(wend::share(heavier, first), wend::share(1.0F, second)), scene);
    return std::atan2(course.direction.y(), course.direction.x()) * 180.0 / pi;
  };
  CHECK(degrees(20.0, -20.0, 1.0F) == doctest::Approx(0.0).epsilon(0.01).scale(1.0));
  CHECK(degrees(80.0, -80.0, 1.1F) > 60.0);  // a blend would go straight ahead, between them
  CHECK(degrees(80.0, -80.0, 0.9F) < -60.0);
}

TEST_CASE("without an opinion among them there is none, and a tie goes to the nose's left") {
  scenes::Scene<double> const scene;
  told const none{0.0F, 0.0F};
  CHECK(scenes::answer(wend::vote<8>(wend::share(1.0F, none), wend::share(2.0F, none)), scene).confidence == 0.0);
  scenes::Scene<double> noseless;  // a heading of no direction has no candidates
  noseless.pose.heading = {0.0, 0.0};
  CHECK(scenes::answer(wend::vote<8>(wend::share(1.0F, told{1.0F, 0.0F})), noseless).confidence == 0.0);
  CHECK(scenes::answer(wend::vote<8>(wend::share(0.0F, told{1.0F, 0.0F})), scene).confidence == 0.0);  // nothing weighs
  told const left{0.0F, 1.0F};
  told const right{0.0F, -1.0F};
  CHECK(scenes::answer(wend::vote<4>(wend::share(1.0F, left), wend::share(1.0F, right)), scene).direction.y() ==
        doctest::Approx(1.0));
}

TEST_CASE("the candidates stand evenly all round, from the nose outwards, left before right") {
  auto const& even = decltype(wend::vote<4>(wend::share(1.0F, told{})))::candidates;
  auto const& odd = decltype(wend::vote<5>(wend::share(1.0F, told{})))::candidates;
  auto const degrees = [](wend::Bearing const& b) {
    return std::atan2(static_cast<double>(b.y), static_cast<double>(b.x)) * 180.0 / pi;
  };
  auto const near = [](double angle) { return doctest::Approx(angle).epsilon(1.0e-4); };
  CHECK(degrees(even[0]) == 0.0);
  CHECK(degrees(even[1]) == near(90.0));
  CHECK(degrees(even[2]) == near(-90.0));
  CHECK(std::abs(degrees(even[3])) == near(180.0));
  CHECK(degrees(odd[0]) == 0.0);
  CHECK(degrees(odd[1]) == near(72.0));
  CHECK(degrees(odd[2]) == near(-72.0));
  CHECK(degrees(odd[3]) == near(144.0));
  CHECK(degrees(odd[4]) == near(-144.0));
}
