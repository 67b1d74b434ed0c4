// wend/lab/arrival_grid.hpp - states in cells: which cells a box touches, and a sweep backward through them.
#pragma once

#include <algorithm>
#include <bit>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <numbers>
#include <vector>

#include "wend/lab/interval.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

/// A box of states: metres, and radians counter-clockwise. A point machine has every heading, and ignores its own.
struct States {
  Interval x;  ///< metres
  Interval y;  ///< metres
  Interval heading;  ///< radians
};

/// Cells by number along each axis, those of the first column, row and layer of headings having number 0.
struct CellIndex {
  int x = 0;  ///< column, from the left
  int y = 0;  ///< row, from below
  int heading = 0;  ///< layer, counter-clockwise from -pi
  /// Whether it is the same cell.
  friend bool operator==(CellIndex const&, CellIndex const&) = default;
};

/// From `first` to `last`, both included; headings go on beyond the last layer with the first.
struct CellRange {
  CellIndex first;  ///< the least numbers
  CellIndex last;  ///< the greatest numbers; its heading may lie beyond the last layer

  /// Whether a cell is one of them, on a grid of so many `headings`.
  [[nodiscard]] bool contains(CellIndex const& c, int headings) const {
    int const turned = c.heading < first.heading ? c.heading + headings : c.heading;
    return first.x <= c.x && c.x <= last.x && first.y <= c.y && c.y <= last.y && first.heading <= turned &&
           turned <= last.heading;
  }
};

/// Equal cells over a rectangle, and over all headings from -pi. Cells are closed: a point on an edge is in both.
class CellGrid {
 public:
  /// No cell at all.
  CellGrid() = default;
  /// `count` cells along each axis over the rectangle from `low` to `high`, in metres.
  CellGrid(Vec2<double> const& low, Vec2<double> const& high, CellIndex const& count)
      : low_(low), high_(high), count_(count) {}

  /// How many cells there are along each axis.
  [[nodiscard]] CellIndex const& count() const { return count_; }
  /// The corner with the least coordinates; metres.
  [[nodiscard]] Vec2<double> const& low() const { return low_; }
  /// The corner with the greatest coordinates; metres.
  [[nodiscard]] Vec2<double> const& high() const { return high_; }
  /// How many cells there are in all.
  [[nodiscard]] std::size_t size() const { return at({0, 0, count_.heading}); }
  /// A cell's place in a row of all cells: by heading, then y, then x.
  [[nodiscard]] std::size_t at(CellIndex const& c) const {
    return (static_cast<std::size_t>(c.heading) * static_cast<std::size_t>(count_.y) + static_cast<std::size_t>(c.y)) *
               static_cast<std::size_t>(count_.x) +
           static_cast<std::size_t>(c.x);
  }

  /// The first cell beyond a block of `size` cells a side, of which those outside the grid are cut off.
  [[nodiscard]] CellIndex end_of(CellIndex const& first, int size) const {
    return {std::min(first.x + size, count_.x), std::min(first.y + size, count_.y),
            std::min(first.heading + size, count_.heading)};
  }

  /// Calls f with the first cell of each block of `size` cells a side, from `first` up to, not including, `end`.
  template <typename F>
  static void for_each_block(CellIndex const& first, CellIndex const& end, int size, F const& f) {
    for (int heading = first.heading; heading < end.heading; heading += size) {
      for (int y = first.y; y < end.y; y += size) {
        for (int x = first.x; x < end.x; x += size) {
          f(CellIndex{x, y, heading});
        }
      }
    }
  }

  /// The states of the cells from `first` up to, not including, `end`.
  [[nodiscard]] States states(CellIndex const& first, CellIndex const& end) const {
    return {Interval(edge(low_.x(), high_.x(), count_.x, first.x), edge(low_.x(), high_.x(), count_.x, end.x)),
            Interval(edge(low_.y(), high_.y(), count_.y, first.y), edge(low_.y(), high_.y(), count_.y, end.y)),
            Interval(edge(-pi, pi, count_.heading, first.heading), edge(-pi, pi, count_.heading, end.heading))};
  }

  /// The fewest cells that cover a box: where it ends on an edge, those on its own side. False when it is not all in
  /// the rectangle.
  [[nodiscard]] bool cover(States const& box, CellRange& cells) const {
    if (!(box.x.low() >= low_.x() && box.x.high() <= high_.x() && box.y.low() >= low_.y() &&
          box.y.high() <= high_.y())) {
      return false;
    }
    range(box.x, low_.x(), high_.x(), count_.x, cells.first.x, cells.last.x);
    range(box.y, low_.y(), high_.y(), count_.y, cells.first.y, cells.last.y);
    double const per_cell = count_.heading / (2.0 * pi);
    if (box.heading.mag() < 100.0 && box.heading.width() * per_cell < count_.heading - 1.5) {
      // Edges of headings do not fit together to the last digit where they wrap: a millionth of a cell is far more.
      cells.first.heading = static_cast<int>(std::floor((box.heading.low() + pi) * per_cell - 1e-6));
      cells.last.heading = static_cast<int>(std::floor((box.heading.high() + pi) * per_cell + 1e-6));
      int const turns = static_cast<int>(std::floor(static_cast<double>(cells.first.heading) / count_.heading));
      cells.first.heading -= turns * count_.heading, cells.last.heading -= turns * count_.heading;
    } else {
      cells.first.heading = 0, cells.last.heading = count_.heading - 1;
    }
    return true;
  }

 private:
  static constexpr double pi = std::numbers::pi;

  // Never falls as i grows, whatever the rounding.
  [[nodiscard]] static double edge(double low, double high, int count, int i) {
    return i >= count ? high : low + (high - low) * i / count;
  }
  // The fewest cells that cover an interval of the axis.
  static void range(Interval const& box, double low, double high, int count, int& first, int& last) {
    double const per_cell = count / (high - low);
    auto const near = [&](double x) { return std::clamp(static_cast<int>((x - low) * per_cell), 0, count - 1); };
    for (first = near(box.low()); edge(low, high, count, first) > box.low();) {
      --first;
    }
    while (first + 1 < count && edge(low, high, count, first + 1) <= box.low()) {
      ++first;
    }
    for (last = std::max(near(box.high()), first); edge(low, high, count, last + 1) < box.high();) {
      ++last;
    }
    while (last > first && edge(low, high, count, last) >= box.high()) {
      --last;
    }
  }

  Vec2<double> low_{0.0, 0.0};
  Vec2<double> high_{0.0, 0.0};
  CellIndex count_{};
};

namespace detail {

/// Which cells are not proved yet, a bit each.
class OpenCells {
 public:
  explicit OpenCells(CellGrid const& grid)
      : count_(grid.count()),
        words_(static_cast<std::size_t>(count_.x + 63) / 64),
        bits_(words_ * static_cast<std::size_t>(count_.y) * static_cast<std::size_t>(count_.heading),
              ~std::uint64_t{0}) {}

  void close(CellIndex const& c) { bits_[row(c.y, c.heading) + word(c.x)] &= ~(std::uint64_t{1} << (word_bit(c.x))); }

  /// Finds an open cell in a range.
  [[nodiscard]] bool find(CellRange const& range, CellIndex& found) const {
    for (int k = range.first.heading; k <= range.last.heading; ++k) {
      int const heading = k >= count_.heading ? k - count_.heading : k;
      for (int y = range.first.y; y <= range.last.y; ++y) {
        std::size_t const start = row(y, heading);
        for (std::size_t w = word(range.first.x); w <= word(range.last.x); ++w) {
          std::uint64_t open = bits_[start + w];
          open &= w == word(range.first.x) ? ~std::uint64_t{0} << word_bit(range.first.x) : ~std::uint64_t{0};
          open &= w == word(range.last.x) ? ~std::uint64_t{0} >> (63U - word_bit(range.last.x)) : ~std::uint64_t{0};
          if (open != 0) {
            found = {static_cast<int>(64 * w) + std::countr_zero(open), y, heading};
            return true;
          }
        }
      }
    }
    return false;
  }

 private:
  [[nodiscard]] std::size_t row(int y, int heading) const {
    return (static_cast<std::size_t>(heading) * static_cast<std::size_t>(count_.y) + static_cast<std::size_t>(y)) *
           words_;
  }
  [[nodiscard]] static std::size_t word(int x) { return static_cast<std::size_t>(x) / 64; }
  [[nodiscard]] static unsigned word_bit(int x) { return static_cast<unsigned>(x) % 64U; }

  CellIndex count_;
  std::size_t words_;
  std::vector<std::uint64_t> bits_;
};

/// A block of cells that waits until all cells it can lead to are proved: ranges from `range` up to `end`.
struct WaitingBlock {
  CellIndex first;
  std::size_t range;
  std::size_t end;
  std::int32_t next = -1;  // of those that wait for the same cell
  bool proved = false;
};

/// Proves all blocks that lead to proved cells only, again and again until there are none. Each waits for one cell that
/// is not proved; when that one is, it looks for another. So a path from a block proved last takes at most as many
/// steps as there were blocks before it, and no cycle can hide; which block is looked at first makes no difference.
class BackwardSweep {
 public:
  BackwardSweep(CellGrid const& grid, OpenCells& open) : grid_(grid), open_(open), waiting_(grid.size(), -1) {}

  /// `on_proved(index of cell)` is called for each cell of a block.
  template <typename OnProved>
  void operator()(std::vector<WaitingBlock>& blocks, std::vector<CellRange> const& ranges, int size,
                  OnProved const& on_proved) {
    std::vector<std::int32_t> ready;
    for (std::size_t i = 0; i < blocks.size(); ++i) {
      ready.push_back(static_cast<std::int32_t>(i));
      while (!ready.empty()) {
        std::int32_t const k = ready.back();
        ready.pop_back();
        WaitingBlock& block = blocks[static_cast<std::size_t>(k)];
        CellIndex obstacle;
        while (block.range < block.end && !open_.find(ranges[block.range], obstacle)) {
          ++block.range;  // once proved a cell stays so
        }
        if (block.range < block.end) {
          std::int32_t& first = waiting_[grid_.at(obstacle)];
          block.next = first;
          first = k;
          continue;
        }
        block.proved = true;
        grid_.for_each_block(block.first, grid_.end_of(block.first, size), 1, [&](CellIndex const& c) {
          open_.close(c);
          on_proved(c);
          std::int32_t& first = waiting_[grid_.at(c)];
          for (; first >= 0; first = blocks[static_cast<std::size_t>(first)].next) {
            ready.push_back(first);
          }
        });
      }
    }
    std::fill(waiting_.begin(), waiting_.end(), -1);
  }

 private:
  CellGrid const& grid_;
  OpenCells& open_;
  std::vector<std::int32_t> waiting_;  // first of those that wait for each cell
};

}  // namespace detail

}  // namespace wend::inline v0::lab
