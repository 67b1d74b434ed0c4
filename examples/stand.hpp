// A stand of trees as a world to cross, from a file with the columns x, y, diameter.
#pragma once

#include <cstddef>
#include <string>

#include <wend/lab/csv.hpp>
#include <wend/lab/simulate.hpp>
#include <wend/lab/svg.hpp>
#include <wend/lab/world.hpp>

namespace stand {

struct Stand {
  wend::lab::World world;
  wend::lab::Trip trip;  ///< from west to east, 2 m beyond the outermost trees
};

/// Reads a stand, in metres. Throws wend::lab::FileError with the place when something is not as expected.
inline Stand read(std::string const& file) {
  using wend::Vec2;
  namespace lab = wend::lab;
  lab::Table const table = lab::parse_table(file, lab::read_whole(file), [](std::string const&) { return false; });
  std::size_t const x = table.column("x");
  std::size_t const y = table.column("y");
  std::size_t const diameter = table.column("diameter");
  if (table.rows.empty()) {
    throw lab::FileError(file, table.names_line + 1, 1, "expected at least one stem, found none");
  }
  Stand stand;
  Vec2<double> low{table.rows[0][x], table.rows[0][y]};
  Vec2<double> high = low;
  for (std::size_t i = 0; i < table.rows.size(); ++i) {
    auto const& row = table.rows[i];
    if (!(row[diameter] > 0.0)) {
      throw table.error(i, diameter, "expected a diameter over 0, found " + lab::detail::fixed(row[diameter], 3));
    }
    stand.world.add(row[x], row[y], 0.5 * row[diameter]);
    low = low.cwiseMin(Vec2<double>{row[x], row[y]});
    high = high.cwiseMax(Vec2<double>{row[x], row[y]});
  }
  double const middle = 0.5 * (low.y() + high.y());
  stand.trip = {{{low.x() - 2.0, middle}, {1.0, 0.0}}, {high.x() + 2.0, middle}, 30.0 + 8.0 * (high.x() - low.x())};
  return stand;
}

}  // namespace stand
