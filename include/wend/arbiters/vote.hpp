// wend/arbiters/vote.hpp - fields vote on a set of candidate headings.
#pragma once

#include <array>
#include <cstddef>
#include <numbers>

#include "wend/angle.hpp"
#include "wend/arbiters/blend.hpp"
#include "wend/field.hpp"

namespace wend::inline v0 {

namespace detail {

// The fields that vote, one inside the other, with their weights.
template <typename Field, typename Rest>
struct Voters {
  Parameter weight;
  [[no_unique_address]] Field field;
  [[no_unique_address]] Rest rest;

  template <Number S>
  struct Memory {
    [[no_unique_address]] PlacedMemory<Field, S, Voters, 0> field;
    [[no_unique_address]] PlacedMemory<Rest, S, Voters, 1> rest;
  };
  static constexpr int count = 1 + Rest::count;
  [[nodiscard]] constexpr Parameter weights() const noexcept { return weight + rest.weights(); }

  template <Number S, int N, typename M, std::size_t Size>
  constexpr void courses(Percept<S, N> const& percept, M& memory, std::array<Course<S>, Size>& into,
                         std::array<S, Size>& votes) const noexcept {
    constexpr std::size_t place = Size - static_cast<std::size_t>(count);
    if constexpr (std::is_empty_v<M>) {
      memory_t<Voters, S> none;
      into[place] = evaluate(field, percept, none.field);
      rest.courses(percept, none.rest, into, votes);
    } else {
      into[place] = evaluate(field, percept, memory.field);
      rest.courses(percept, memory.rest, into, votes);
    }
    votes[place] = S(weight) * into[place].confidence;
  }
};

// Bearings all round, from straight ahead outwards, left before right. A function, since clang 14 does not take a
// lambda for one that only the compiler runs.
template <int Count>
[[nodiscard]] consteval std::array<Bearing, static_cast<std::size_t>(Count)> bearings_outwards() noexcept {
  std::array<Bearing, static_cast<std::size_t>(Count)> all{};
  for (int i = 0; i < Count; ++i) {
    int const steps = (i + 1) / 2;  // 0, 1, 1, 2, 2, ...
    double const angle = 2.0 * std::numbers::pi / Count * steps;
    all[static_cast<std::size_t>(i)] = bearing(i % 2 == 1 ? angle : -angle);
  }
  return all;
}

struct NoVoters {
  static constexpr int count = 0;
  [[nodiscard]] constexpr Parameter weights() const noexcept { return 0.0F; }
  template <Number S, int N, typename M, std::size_t Size>
  constexpr void courses(Percept<S, N> const&, M&, std::array<Course<S>, Size>&, std::array<S, Size>&) const noexcept {}
};

}  // namespace detail

/// Arbitration by votes (Rosenblatt 1997, J. Experimental and Theoretical Artificial Intelligence 9:339-360): each
/// field votes on each of `Candidates` headings, evenly spaced from the nose on, and the heading with the most votes is
/// the course; of equal ones that nearest to the nose, the left one first. A field's vote for a heading is its weight
/// times its confidence times ((1 + cos) / 2)^4 of the angle between that heading and its own direction (the rating is
/// ours): 1 for its own, a half at 47 degrees, under a hundredth from 143 degrees on. So two fields that nearly agree
/// are averaged, and of two that are at odds one wins, where a blend would go between them. Confidence is the share of
/// all votes there could be. The speed share is that of the winner's voters, weighed by their votes. The course is one
/// of the candidates, so it is off the best one by up to pi / Candidates.
template <int Candidates, typename Voters>
struct vote_field {
  static_assert(Candidates >= 3, "wend: vote needs three candidate headings at least; write vote<36>(...)");
  [[no_unique_address]] Voters voters;  ///< the fields, each with its weight

  /// What the fields remember.
  template <Number S>
  using Memory = memory_t<Voters, S>;

  /// The winner.
  template <Number S, int N>
  [[nodiscard]] constexpr Course<S> operator()(Percept<S, N> const& percept, Memory<S>& memory) const noexcept {
    constexpr auto count = static_cast<std::size_t>(Voters::count);
    std::array<Course<S>, count> courses;
    std::array<S, count> votes;
    voters.courses(percept, memory, courses, votes);
    Vec2<S> const nose = polar(percept.pose.heading).direction;
    Course<S> best;
    S most = S(0.0F);
    for (Bearing const& bearing : candidates) {
      Vec2<S> const heading = turned_out_of(nose, Vec2<S>(S(bearing.x), S(bearing.y)));
      S score = S(0.0F);
      S speed = S(0.0F);
      for (std::size_t i = 0; i < count; ++i) {
        S const half = S(0.5F) * (S(1.0F) + dot(heading, courses[i].direction));
        S const vote = votes[i] * squared(S(squared(half)));
        score = score + vote;
        speed = speed + vote * courses[i].speed_share;
      }
      mask_t<S> const wins = score > most;
      best.direction = select(wins, heading, best.direction);
      best.speed_share = select(wins, S(speed / select(wins, score, S(1.0F))), best.speed_share);
      most = greatest(most, score);
    }
    S const share = most / S(voters.weights());
    return course_along(polar(best.direction), clamp(share, S(0.0F), S(1.0F)),
                        clamp(best.speed_share, S(0.0F), S(1.0F)));
  }

  /// The candidates, from the nose outwards, left before right.
  static constexpr std::array<Bearing, static_cast<std::size_t>(Candidates)> candidates =
      detail::bearings_outwards<Candidates>();
};

namespace detail {

[[nodiscard]] constexpr NoVoters voters_of() noexcept { return {}; }
template <typename Field, typename... Rest>
[[nodiscard]] constexpr auto voters_of(Share<Field> first, Share<Rest>... rest) noexcept {
  return Voters<Field, decltype(voters_of(rest...))>{first.weight, first.field, voters_of(rest...)};
}

}  // namespace detail

/// vote<36>(share(1.0F, toward_goal{}), share(2.0F, away_from_discs{})): each field with its weight, which may not be
/// negative, and not all zero.
template <int Candidates = 36, typename... Fields>
[[nodiscard]] constexpr auto vote(Share<Fields>... shares) noexcept {
  static_assert(sizeof...(Fields) > 0, "wend: vote needs a field at least: vote(share(1.0F, toward_goal{}), ...)");
  return vote_field<Candidates, decltype(detail::voters_of(shares...))>{detail::voters_of(shares...)};
}

}  // namespace wend::inline v0
