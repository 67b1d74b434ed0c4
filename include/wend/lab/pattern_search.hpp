// wend/lab/pattern_search.hpp - the least value of a function in a box, without derivatives, within a budget of calls;
// and the set of trade-offs between two aims.
#pragma once

#include <algorithm>
#include <array>
#include <atomic>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <functional>
#include <limits>
#include <optional>
#include <set>
#include <span>
#include <stdexcept>
#include <utility>
#include <vector>

#include "wend/lab/random.hpp"

namespace wend::inline v0::lab {

/// What a point is worth.
struct Judgement {
  double violation = 0.0;  ///< how far constraints are missed, all together; 0 where all hold
  double value = std::numeric_limits<double>::infinity();  ///< to be least
};

/// Feasibility first (Deb 2000, "An efficient constraint handling method for genetic algorithms"): what keeps all
/// constraints is better than what does not; of two that do, the one of less value; of two that do not, the one that
/// misses them by less. No weight between value and violation has to be chosen. What is not a number is better than
/// nothing.
[[nodiscard]] inline bool better(Judgement const& a, Judgement const& b) {
  auto const known = [](double x) { return std::isnan(x) ? std::numeric_limits<double>::infinity() : x; };
  double const missed_a = known(a.violation);
  double const missed_b = known(b.violation);
  if (missed_a > 0.0 || missed_b > 0.0) {
    return missed_a < missed_b;
  }
  return known(a.value) < known(b.value);
}

/// The range of one coordinate, low <= high, both finite.
struct SearchRange {
  double low = 0.0;   ///< in the coordinate's own unit
  double high = 1.0;  ///< likewise
};

/// How a pattern search goes about it. Steps are shares of each coordinate's range.
struct PatternSearchOptions {
  int budget = 200;          ///< points to judge, at the most; at least 1
  int spread = 40;           ///< of them, to be spread over the box first
  double first_step = 0.25;  ///< and the longest, up to 1
  double least_step = 0.04;  ///< once the step is under this, it begins elsewhere
  std::uint64_t seed = 1;    ///< shifts the spread points, and turns the directions
  std::atomic<bool> const* stop = nullptr;  ///< once true, it ends, with what it has so far
};

/// A point that was judged.
struct Tried {
  std::vector<double> at;  ///< one coordinate each, within its range
  Judgement judged;        ///< what was said of it
};

/// What a pattern search gives.
struct PatternSearch {
  std::vector<Tried> tried;  ///< in order; the start is the first
  std::size_t best = 0;      ///< place in `tried`, if that has any
  bool settled =
      false;  ///< it ended with budget left: it had begun everywhere it would, and at its best found nothing better
};

namespace detail {

// The number whose digits in a base are those of i, mirrored at the point: in [0, 1) (van der Corput 1935).
[[nodiscard]] inline double mirrored_digits(std::uint64_t i, std::uint64_t base) {
  double result = 0.0;
  double place = 1.0 / static_cast<double>(base);
  for (; i > 0; i /= base) {
    result += place * static_cast<double>(i % base);
    place /= static_cast<double>(base);
  }
  return result;
}

// The first primes: the bases of Halton's sequence, and how many coordinates a search may have.
inline constexpr std::array<std::uint64_t, 16> halton_bases{2, 3, 5, 7, 11, 13, 17, 19, 23, 29, 31, 37, 41, 43, 47, 53};

// State of one search. Points are in shares of the box, [0, 1] in each coordinate.
template <typename Allowed, typename Judge>
class PatternSearcher {
 public:
  PatternSearcher(std::span<SearchRange const> box, Allowed const& allowed, Judge const& judge,
                  PatternSearchOptions const& options)
      : box_(box), allowed_(allowed), judge_(judge), options_(options), draws_(options.seed, 0) {}

  [[nodiscard]] PatternSearch run(std::span<double const> start) {
    std::vector<double> shares;
    for (std::size_t k = 0; k < box_.size(); ++k) {
      double const width = box_[k].high - box_[k].low;
      shares.push_back(width > 0.0 ? (start[k] - box_[k].low) / width : 0.0);
    }
    try_at(shares, std::vector<double>(start.begin(), start.end()));
    spread();
    std::size_t const starts = result_.tried.size();
    std::size_t best_before = std::numeric_limits<std::size_t>::max();  // none
    std::uint32_t poll_number = 0;
    while (!ended_) {
      std::optional<std::size_t> const from = next_start(starts);
      if (!from && result_.best == best_before) {
        result_.settled = true;
        break;
      }
      here_ = from ? *from : result_.best;
      best_before = from ? best_before : result_.best;
      begun_.push_back(shares_[here_]);
      for (double step = options_.first_step; !ended_ && step >= options_.least_step; ++poll_number) {
        step = poll(step, poll_number) ? std::min(2.0 * step, options_.first_step) : 0.5 * step;
      }
      begun_.push_back(shares_[here_]);
    }
    return std::move(result_);
  }

 private:
  // Halton's points, all shifted by the same drawn amount and wrapped (Cranley and Patterson 1976). Points that are not
  // allowed are passed over, up to a bound: where hardly any is, there are fewer.
  void spread() {
    int const wanted = options_.spread;
    for (std::uint64_t i = 1; !ended_ && spread_ < wanted && i <= 64 * static_cast<std::uint64_t>(wanted); ++i) {
      std::vector<double> shares(box_.size());
      for (std::size_t k = 0; k < shares.size(); ++k) {
        double const shift = draws_.uniform({1, static_cast<std::uint32_t>(k)});
        double const x = mirrored_digits(i, halton_bases[k]) + shift;
        shares[k] = x - std::floor(x);
      }
      std::size_t const before = result_.tried.size();
      try_at(shares);
      spread_ += result_.tried.size() > before ? 1 : 0;
    }
  }

  // The best of the spread points that are none too near to where the search has begun or ended before.
  [[nodiscard]] std::optional<std::size_t> next_start(std::size_t starts) const {
    std::optional<std::size_t> best;
    for (std::size_t i = 0; i < starts; ++i) {
      bool const is_new = std::all_of(begun_.begin(), begun_.end(), [&](std::vector<double> const& other) {
        double apart = 0.0;
        for (std::size_t k = 0; k < other.size(); ++k) {
          apart = std::max(apart, std::abs(other[k] - shares_[i][k]));
        }
        return apart > options_.first_step;
      });
      if (is_new && (!best || better(result_.tried[i].judged, result_.tried[*best].judged))) {
        best = i;
      }
    }
    return best;
  }

  // The first point around here that is better, both ways along each of some orthogonal directions: the axes at
  // first, then axes that are mirrored in a plane drawn anew for each poll. After a success it is tried twice as far.
  bool poll(double step, std::uint32_t number) {
    std::size_t const n = box_.size();
    std::vector<double> const from = shares_[here_];
    std::vector<double> normal(n, 0.0);
    if (number > 0) {
      double square = 0.0;
      for (std::size_t k = 0; k < n; ++k) {
        normal[k] = draws_.normal({2, number, static_cast<std::uint32_t>(k)});
        square += normal[k] * normal[k];
      }
      std::transform(normal.begin(), normal.end(), normal.begin(), [&](double x) { return x / std::sqrt(square); });
    }
    auto const moved = [&](std::size_t axis, double by) {
      std::vector<double> shares = from;
      for (std::size_t k = 0; k < n; ++k) {
        double const along = (k == axis ? 1.0 : 0.0) - 2.0 * normal[k] * normal[axis];
        shares[k] = from[k] + by * along;
      }
      return shares;
    };
    for (std::size_t i = 0; i < n; ++i) {
      std::size_t const axis = (i + favoured_) % n;
      for (double const by : {step, -step}) {
        if (try_at(moved(axis, by))) {
          favoured_ = axis;
          try_at(moved(axis, 2.0 * by));
          return true;
        }
        if (ended_) {
          return false;
        }
      }
    }
    return false;
  }

  // Whether this is better than here, and then it is here from now on. What is outside of the box is moved to its edge;
  // nothing is judged twice.
  bool try_at(std::vector<double> shares) {
    std::vector<double> at(shares.size());
    for (std::size_t k = 0; k < shares.size(); ++k) {
      shares[k] = std::clamp(shares[k], 0.0, 1.0);
      at[k] = std::clamp(box_[k].low + shares[k] * (box_[k].high - box_[k].low), box_[k].low, box_[k].high);
    }
    return try_at(shares, at);
  }
  bool try_at(std::vector<double> const& shares, std::vector<double> const& at) {
    bool const stopped = options_.stop != nullptr && options_.stop->load(std::memory_order_relaxed);
    ended_ = ended_ || stopped || result_.tried.size() >= static_cast<std::size_t>(std::max(0, options_.budget));
    if (ended_ || !seen_.insert(at).second || !allowed_(at)) {
      return false;
    }
    std::optional<Judgement> const judged = judge_(at);
    if (!judged) {
      ended_ = true;
      return false;
    }
    result_.tried.push_back({at, *judged});
    shares_.push_back(shares);
    std::size_t const place = result_.tried.size() - 1;
    if (better(*judged, result_.tried[result_.best].judged)) {
      result_.best = place;
    }
    if (!better(*judged, result_.tried[here_].judged)) {
      return false;
    }
    here_ = place;
    return true;
  }

  std::span<SearchRange const> box_;
  Allowed const& allowed_;
  Judge const& judge_;
  PatternSearchOptions const& options_;
  Draws draws_;
  PatternSearch result_;
  std::set<std::vector<double>> seen_;
  std::vector<std::vector<double>> shares_;  // of the points tried
  std::vector<std::vector<double>> begun_;  // where the search has begun, and where it ended
  std::size_t here_ = 0;
  std::size_t favoured_ = 0;
  int spread_ = 0;
  bool ended_ = false;
};

}  // namespace detail

/// Looks for the least value of a function in a box: first at the start, then at points spread over the box (Halton
/// 1960), then by pattern searches: from the best of those points, then from the best of those that are further than
/// the first step from where it has been, and so on; and with budget left, once more from the best of all, until that
/// brings nothing. A pattern search takes a step both ways along orthogonal directions, and stays as soon as one is
/// better; it doubles the step after a success (up to the first step), and halves it where none is better (Hooke and
/// Jeeves 1961; Torczon 1997). The directions are turned anew for each poll, which lets it slide along constraints
/// where fixed axes would stall (Audet and Dennis 2006); without their mesh, so their proof of convergence does not
/// carry over: where several constraints meet it may stop near the optimum, about a hundredth of the value away. What
/// is least in the whole box nobody knows: another seed may find better.
///
/// `allowed(point)` says no to points that must not be judged; `judge(point)` gives a Judgement, or std::nullopt to end
/// the search. Both are called one at a time, in an order that depends on the judgements and the seed only. Throws
/// std::invalid_argument for a box that is empty or of more than 16 coordinates, and a start outside of it or not
/// allowed, no budget, and steps that are not over 0.
template <typename Allowed, typename Judge>
[[nodiscard]] PatternSearch pattern_search(std::span<SearchRange const> box, std::span<double const> start,
                                           Allowed const& allowed, Judge const& judge,
                                           PatternSearchOptions const& options = {}) {
  if (box.empty() || box.size() > detail::halton_bases.size() || box.size() != start.size()) {
    throw std::invalid_argument("wend: pattern_search: expected 1 to 16 coordinates, and a start with as many");
  }
  for (std::size_t k = 0; k < box.size(); ++k) {
    if (!(std::isfinite(box[k].low) && std::isfinite(box[k].high) && box[k].low <= start[k] &&
          start[k] <= box[k].high)) {
      throw std::invalid_argument("wend: pattern_search: expected a finite box with the start in it");
    }
  }
  if (options.budget < 1 || !(options.first_step > 0.0 && options.first_step <= 1.0) || !(options.least_step > 0.0)) {
    throw std::invalid_argument(
        "wend: pattern_search: expected a budget, a first step up to 1, and a least one over 0");
  }
  if (!allowed(std::vector<double>(start.begin(), start.end()))) {
    throw std::invalid_argument("wend: pattern_search: the start is a point that is not allowed");
  }
  return detail::PatternSearcher<Allowed, Judge>(box, allowed, judge, options).run(start);
}

/// What a point costs, and what it brings.
struct TradeOff {
  double cost = 0.0;  ///< the less the better
  double gain = 0.0;  ///< the more the better
};

/// The places of those points that no other one dominates, which would cost no more, gain no less, and not be the same
/// in both (Pareto's order); by cost. Of equal ones the first. What is not a number is left out.
[[nodiscard]] inline std::vector<std::size_t> non_dominated(std::span<TradeOff const> points) {
  std::vector<std::size_t> order;
  for (std::size_t i = 0; i < points.size(); ++i) {
    if (!std::isnan(points[i].cost) && !std::isnan(points[i].gain)) {
      order.push_back(i);
    }
  }
  std::sort(order.begin(), order.end(), [&](std::size_t a, std::size_t b) {
    if (points[a].cost != points[b].cost) {
      return points[a].cost < points[b].cost;
    }
    return points[a].gain != points[b].gain ? points[a].gain > points[b].gain : a < b;
  });
  // By cost: each one kept has to gain more than all that cost less.
  std::vector<std::size_t> kept;
  for (std::size_t const i : order) {
    if (kept.empty() || points[i].gain > points[kept.back()].gain) {
      kept.push_back(i);
    }
  }
  return kept;
}

}  // namespace wend::inline v0::lab
