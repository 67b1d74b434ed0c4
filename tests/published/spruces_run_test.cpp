// Discs from ranges against a map of real tree stems: Stoyan, Kendall and Mecke (1987), Stochastic Geometry and its
// Applications, the spruces data; the ranges were cast over it apart from this project (tests/data/SOURCES.md).
#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdlib>
#include <fstream>
#include <limits>
#include <numbers>
#include <string>
#include <vector>

#include <doctest/doctest.h>

#include "wend/sensing/ring.hpp"

namespace {

constexpr int beams = 180;
constexpr double spacing = 2.0 * std::numbers::pi / beams;
constexpr double infinity = std::numeric_limits<double>::infinity();

// The ranger of the recording: 6 m reach, 15 mm noise; it says infinity where a cell of the file is empty.
constexpr wend::Ring<beams> ring{wend::even_bearings<beams>(0.0, spacing), 0.05F, 6.1F, 0.015F};

// Rows of numbers after a line of headings; an empty cell is infinite.
std::vector<std::vector<double>> read_csv(char const* name) {
  std::ifstream file(std::string(WEND_TEST_DATA) + "/" + name);
  std::vector<std::vector<double>> rows;
  std::string line;
  std::getline(file, line);
  while (std::getline(file, line)) {
    std::vector<double> row;
    std::size_t begin = 0;
    while (begin <= line.size()) {
      std::size_t const comma = std::min(line.find(',', begin), line.size());
      std::string const cell = line.substr(begin, comma - begin);
      row.push_back(cell.empty() || cell == "\r" ? infinity : std::strtod(cell.c_str(), nullptr));
      begin = comma + 1;
    }
    rows.push_back(row);
  }
  return rows;
}

struct Stem {
  double x, y, radius;
};

// Where a ray from (x, y) first meets a stem, by the quadratic; infinite when it does not.
double ray_to(Stem const& stem, double x, double y, double angle) {
  double const dx = stem.x - x;
  double const dy = stem.y - y;
  double const b = dx * std::cos(angle) + dy * std::sin(angle);
  double const root_of = b * b - (dx * dx + dy * dy - stem.radius * stem.radius);
  return root_of >= 0.0 && b > 0.0 ? b - std::sqrt(root_of) : infinity;
}

struct Figures {
  int rows = 0;
  int cases = 0;         // a stem within 4 m with three echoes or more, in one row
  int found = 0;         // of them: its nearest point within 0.15 m of a disc's edge
  int covering = 0;      // discs over the robot's origin
  int intruding = 0;     // discs nearer than 0.2 m though no echo is
  int dropped = 0;       // rows with more discs than fit
  int most_discs = 0;
  double worst = 0.0;    // metres: the greatest distance of a case's nearest point from the nearest edge
  double sum = 0.0;
};

template <typename S>
Figures run() {
  std::vector<Stem> stems;
  for (auto const& row : read_csv("spruces.csv")) {
    stems.push_back({row[0], row[1], row[2] / 2.0});
  }
  Figures figures;
  for (auto const& row : read_csv("spruces-run.csv")) {
    REQUIRE(row.size() == 4 + beams);
    std::array<S, beams> ranges{};
    for (std::size_t k = 0; k < beams; ++k) {
      ranges[k] = static_cast<S>(row[4 + k]);
    }
    wend::DiscSet<S, 32> discs;
    wend::RingCount const count = ring.discs(ranges, discs);
    ++figures.rows;
    REQUIRE(count.echoes + count.no_echo + count.zero + count.too_far == beams);
    figures.dropped += discs.dropped() > 0 ? 1 : 0;
    figures.most_discs = std::max(figures.most_discs, discs.size());
    REQUIRE_FALSE(discs.rejected());

    double const x = row[1];
    double const y = row[2];
    double const heading = row[3];
    double nearest_echo = infinity;
    std::vector<int> echoes(stems.size(), 0);
    for (std::size_t k = 0; k < beams; ++k) {
      double const range = row[4 + k];
      if (range == 0.0 || range == infinity) {
        continue;
      }
      nearest_echo = std::min(nearest_echo, range);
      double first = infinity;
      std::size_t whose = 0;
      for (std::size_t i = 0; i < stems.size(); ++i) {
        double const here = ray_to(stems[i], x, y, heading + static_cast<double>(k) * spacing);
        whose = here < first ? i : whose;
        first = std::min(first, here);
      }
      if (first < infinity) {
        ++echoes[whose];
      }
    }
    for (wend::Disc<S> const& disc : discs) {
      double const reach = static_cast<double>(wend::gap(disc, wend::zero2<S>()));
      figures.covering += reach <= 0.0 ? 1 : 0;
      figures.intruding += reach < 0.2 && nearest_echo >= 0.2 ? 1 : 0;
    }
    for (std::size_t i = 0; i < stems.size(); ++i) {
      double const away = std::hypot(stems[i].x - x, stems[i].y - y);
      double const near_side = away - stems[i].radius;
      if (near_side > 4.0 || echoes[i] < 3) {
        continue;
      }
      double const bearing = std::atan2(stems[i].y - y, stems[i].x - x) - heading;
      wend::Vec2<S> const nearest_point(static_cast<S>(near_side * std::cos(bearing)),
                                        static_cast<S>(near_side * std::sin(bearing)));
      double off = infinity;
      for (wend::Disc<S> const& disc : discs) {
        off = std::min(off, std::abs(static_cast<double>(wend::gap(disc, nearest_point))));
      }
      ++figures.cases;
      figures.found += off <= 0.15 ? 1 : 0;
      figures.worst = std::max(figures.worst, off);
      figures.sum += off;
    }
  }
  return figures;
}

}  // namespace

TEST_CASE_TEMPLATE("the near side of each stem within 4 m lies within 0.15 m of a disc, and none covers the robot", S,
                   float, double) {
  Figures const figures = run<S>();
  CAPTURE(figures.worst);
  CHECK(figures.rows == 737);
  CHECK(figures.cases > 1000);  // stems seen with three echoes or more, row by row
  CHECK(figures.found >= 0.99 * figures.cases);
  CHECK(figures.sum / figures.cases < 0.06);
  CHECK(figures.covering == 0);
  CHECK(figures.intruding == 0);
  CHECK(figures.dropped == 0);
  CHECK(figures.most_discs > 5);  // the wood is dense enough for the test to mean something
}
