// wend/lab/ground.hpp - a world that many runs share, with an index of where its discs are.
#pragma once

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <limits>
#include <utility>
#include <vector>

#include "wend/lab/world.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// A disc of a ground, by its number in the world, and the metres from some point to its edge.
struct NearDisc {
  double gap;  ///< metres; negative inside the disc
  std::uint32_t number;  ///< place in World::discs

  /// By gap, and of equal gaps by number: an order that is the same on every machine.
  friend bool operator<(NearDisc const& a, NearDisc const& b) noexcept {
    return a.gap < b.gap || (!(b.gap < a.gap) && a.number < b.number);
  }
};

/// A world whose discs are sorted into square cells, by their middles at time 0, so that what is near is found in a
/// time that does not grow with the world. Discs much larger than a cell are few or alike, or the search slows down.
class Ground {
 public:
  /// Sorts the discs: takes a time in proportion to their number.
  explicit Ground(World world) : world_(std::move(world)) {
    std::vector<WorldDisc> const& discs = world_.discs;
    if (discs.empty()) {
      return;
    }
    low_ = high_ = discs.front().disc.centre;
    for (WorldDisc const& d : discs) {
      low_ = low_.cwiseMin(d.disc.centre);
      high_ = high_.cwiseMax(d.disc.centre);
      largest_ = std::max(largest_, d.disc.radius);
      moving_ = moving_ || d.velocity.squaredNorm() > 0.0;
    }
    Vec2<double> const size = high_ - low_;
    double const count = static_cast<double>(discs.size());
    // About two discs a cell; never so narrow that a row of discs would take more cells than that.
    cell_ = std::max({std::sqrt(2.0 * size.x() * size.y() / count), 2.0 * size.maxCoeff() / count, 1e-3});
    columns_ = static_cast<std::size_t>(size.x() / cell_) + 1;
    rows_ = static_cast<std::size_t>(size.y() / cell_) + 1;
    starts_.assign(columns_ * rows_ + 1, 0);
    for (WorldDisc const& d : discs) {
      ++starts_[place(d.disc.centre) + 1];
    }
    for (std::size_t i = 1; i < starts_.size(); ++i) {
      starts_[i] += starts_[i - 1];
    }
    numbers_.resize(discs.size());
    std::vector<std::uint32_t> next(starts_.begin(), starts_.end() - 1);
    for (std::uint32_t i = 0; i < discs.size(); ++i) {
      numbers_[next[place(discs[i].disc.centre)]++] = i;
    }
  }

  /// The world as it was given.
  [[nodiscard]] World const& world() const noexcept { return world_; }
  /// Whether any disc moves; the index is of no use then.
  [[nodiscard]] bool moving() const noexcept { return moving_; }

  /// Appends all discs whose edge is within `reach` metres of a point, in no order to rely on.
  void within(Vec2<double> const& point, double reach, std::vector<NearDisc>& found) const {
    if (numbers_.empty()) {
      return;
    }
    double const way = reach + largest_;
    auto const [left, right] = span(point.x() - low_.x(), way, columns_);
    auto const [bottom, top] = span(point.y() - low_.y(), way, rows_);
    for (std::size_t row = bottom; row < top; ++row) {
      std::size_t const line = row * columns_;
      for (std::size_t i = starts_[line + left]; i < starts_[line + right]; ++i) {  // cells of a row lie side by side
        double const gap = v0::gap(world_.discs[numbers_[i]].disc, point);
        if (gap <= reach) {
          found.push_back({gap, numbers_[i]});
        }
      }
    }
  }

  /// The discs within `reach` metres of a point, and in any case the nearest one: the `sorted` nearest in order, others
  /// behind. Returns a distance that every disc it did not find is away at least.
  double nearest(Vec2<double> const& point, double reach, std::vector<NearDisc>& found,
                 std::size_t sorted = std::numeric_limits<std::size_t>::max()) const {
    found.clear();
    double const all = (high_ - low_).norm() + distance_to_box(point) + largest_;
    while (true) {
      within(point, reach, found);
      if (!found.empty() || reach >= all || numbers_.empty()) {
        break;
      }
      reach = std::max(2.0 * reach, cell_);
    }
    auto const middle = found.begin() + static_cast<std::ptrdiff_t>(std::min(sorted, found.size()));
    std::partial_sort(found.begin(), middle, found.end());
    return found.size() == numbers_.size() ? std::numeric_limits<double>::infinity() : reach;
  }

  /// Metres from a point to the nearest edge at time 0; negative inside a disc; infinite in an empty world.
  [[nodiscard]] double gap(Vec2<double> const& point) const {
    std::vector<NearDisc> found;
    nearest(point, cell_, found);
    return found.empty() ? std::numeric_limits<double>::infinity() : found.front().gap;
  }

 private:
  [[nodiscard]] std::size_t place(Vec2<double> const& p) const noexcept {
    auto const along = [this](double x, std::size_t count) noexcept {
      return std::min(static_cast<std::size_t>(x / cell_), count - 1);
    };
    return along(p.y() - low_.y(), rows_) * columns_ + along(p.x() - low_.x(), columns_);
  }

  // The cells from x - way to x + way, the last one excluded.
  [[nodiscard]] std::pair<std::size_t, std::size_t> span(double x, double way, std::size_t count) const noexcept {
    double const most = static_cast<double>(count);
    auto const first = static_cast<std::size_t>(std::clamp(std::floor((x - way) / cell_), 0.0, most));
    auto const end = static_cast<std::size_t>(std::clamp(std::floor((x + way) / cell_) + 1.0, 0.0, most));
    return {std::min(first, end), end};
  }

  [[nodiscard]] double distance_to_box(Vec2<double> const& p) const noexcept {
    return (p - p.cwiseMax(low_).cwiseMin(high_)).norm();
  }

  World world_;
  Vec2<double> low_{0.0, 0.0};
  Vec2<double> high_{0.0, 0.0};
  double largest_ = 0.0;
  bool moving_ = false;
  double cell_ = 1.0;
  std::size_t columns_ = 0;
  std::size_t rows_ = 0;
  std::vector<std::uint32_t> starts_;  // where each cell's discs begin in numbers_, and an end
  std::vector<std::uint32_t> numbers_;  // of the discs, cell by cell
};

}  // namespace wend::inline v0::lab
