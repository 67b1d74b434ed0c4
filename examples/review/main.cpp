// review: drives four policies through one world on the same noise, and prints what became of each.
//
//   review [--out DIR] [--map STEMS.csv] [--seed N]
//
// Without a map: the cellar of cellar.hpp. With one: a stand of trees given as x, y, diameter in metres, crossed from
// west to east. Writes DIR/<policy>.csv and .svg for each policy, and DIR/all.svg.
#include <algorithm>
#include <charconv>
#include <cstdint>
#include <cstdio>
#include <cstring>
#include <exception>
#include <filesystem>
#include <string>
#include <system_error>
#include <vector>

#include <getopt.h>

#include <wend/lab/csv.hpp>
#include <wend/lab/picture.hpp>
#include <wend/lab/simulate.hpp>
#include <wend/lab/trace.hpp>

#include "../policies.hpp"
#include "cellar.hpp"

namespace {

using namespace wend;

constexpr char const* usage =
    "usage: review [--out DIR] [--map STEMS.csv] [--seed N]\n"
    "  --out DIR        where pictures and tables go (default: review-out)\n"
    "  --map STEMS.csv  a stand of trees, columns x,y,diameter in metres (default: the cellar)\n"
    "  --seed N         chooses the noise (default: 1)\n";

struct Scene {
  std::string title;
  lab::World world;
  lab::Trip trip;
};

Scene stand(std::string const& file) {
  lab::Table const table = lab::parse_table(file, lab::read_whole(file), [](std::string const&) { return false; });
  std::size_t const x = table.column("x");
  std::size_t const y = table.column("y");
  std::size_t const diameter = table.column("diameter");
  if (table.rows.empty()) {
    throw lab::FileError(file, table.names_line + 1, 1, "expected at least one stem, found none");
  }
  Scene scene;
  scene.title = "A cart crosses a stand of " + std::to_string(table.rows.size()) + " trees";
  Vec2<double> low{table.rows[0][x], table.rows[0][y]};
  Vec2<double> high = low;
  for (std::size_t i = 0; i < table.rows.size(); ++i) {
    auto const& row = table.rows[i];
    if (!(row[diameter] > 0.0)) {
      throw table.error(i, diameter, "expected a diameter over 0, found " + lab::detail::fixed(row[diameter], 3));
    }
    scene.world.add(row[x], row[y], 0.5 * row[diameter]);
    low = low.cwiseMin(Vec2<double>{row[x], row[y]});
    high = high.cwiseMax(Vec2<double>{row[x], row[y]});
  }
  double const middle = 0.5 * (low.y() + high.y());
  scene.trip = {{{low.x() - 2.0, middle}, {1.0, 0.0}}, {high.x() + 2.0, middle}, 30.0 + 8.0 * (high.x() - low.x())};
  return scene;
}

template <typename Policy>
lab::DrawnRun drive(char const* name, Policy const& policy, Scene const& scene, std::uint64_t seed) {
  Loop<Policy, Ring<180>> const loop{.policy = policy, .sensing = cellar::ring};
  return {name, lab::simulate(loop, cellar::cart(), scene.world, scene.trip, seed, 0, true)};
}

void print(lab::DrawnRun const& drawn) {
  lab::Run const& run = drawn.run;
  std::string ending = text(run.ending);
  if (run.ending == lab::Ending::time_out) {
    ending = ending + ": " + text(run.last_status);
  }
  double const a_minute = 60.0 * run.switches / std::max(run.time, 1e-9);
  std::string const dwell = run.switches < 2 ? "-" : lab::detail::fixed(run.least_dwell, 2);
  std::printf("%-16s %-20s %7.1f %7.2f %10.0f %12.1f %12s\n", drawn.name.c_str(), ending.c_str(), run.time,
              run.path_length / run.straight_length, 100.0 * run.least_clearance, a_minute, dwell.c_str());
}

int review(std::string const& out, std::string const& map, std::uint64_t seed) {
  Scene const scene = map.empty() ? Scene{"A tray cart crosses the mushroom cellar", cellar::world(), cellar::trip()}
                                  : stand(map);
  std::error_code why;  // before the work, so that it is not for nothing
  std::filesystem::create_directories(out, why);
  if (why || !std::filesystem::is_directory(out)) {
    throw lab::FileError(out, "expected a folder, or a place where one can be made" +
                                  (why ? " (" + why.message() + ")" : std::string()));
  }
  std::vector<lab::DrawnRun> const runs{drive("hard switch", policies::hard_switch, scene, seed),
                                        drive("two thresholds", policies::two_thresholds, scene, seed),
                                        drive("blend", policies::blended, scene, seed),
                                        drive("composed", policies::composed, scene, seed)};
  std::printf("%s: %zu discs, %.1f m as the crow flies, seed %llu\n\n", scene.title.c_str(), scene.world.discs.size(),
              runs.front().run.straight_length, static_cast<unsigned long long>(seed));
  std::printf("%-16s %-20s %7s %7s %10s %12s %12s\n", "policy", "ending", "time", "path", "clearance", "switches",
              "dwell");
  std::printf("%-16s %-20s %7s %7s %10s %12s %12s\n", "", "", "s", "ratio", "least, cm", "a minute", "least, s");
  for (lab::DrawnRun const& run : runs) {
    print(run);
  }

  auto const place = [&out](std::string name, char const* ending) {
    std::replace(name.begin(), name.end(), ' ', '-');
    return (std::filesystem::path(out) / (name + ending)).string();
  };
  lab::write_whole(place("all", ".svg"), lab::picture(scene.title, scene.world, scene.trip, runs));
  for (lab::DrawnRun const& run : runs) {
    lab::write_whole(place(run.name, ".svg"),
                     lab::picture(scene.title + ": " + run.name, scene.world, scene.trip, {run}));
    lab::write_whole(place(run.name, ".csv"), lab::trace(run.run));
  }
  std::printf("\nPictures and tables are in %s/.\n"
              "These are simulations: evidence, not proof, and no safety function. A machine that can hurt someone needs\n"
              "protective devices and people qualified for them; local codes come first.\n",
              out.c_str());
  return 0;
}

}  // namespace

int main(int argc, char** argv) {
  std::string out = "review-out";
  std::string map;
  std::uint64_t seed = 1;
  option const options[] = {{"out", required_argument, nullptr, 'o'},
                            {"map", required_argument, nullptr, 'm'},
                            {"seed", required_argument, nullptr, 's'},
                            {"help", no_argument, nullptr, 'h'},
                            {nullptr, 0, nullptr, 0}};
  for (int given = 0; (given = getopt_long(argc, argv, "", options, nullptr)) != -1;) {
    switch (given) {
      case 'o': out = optarg; break;
      case 'm': map = optarg; break;
      case 's': {
        char const* const end = optarg + std::strlen(optarg);
        auto const parsed = std::from_chars(optarg, end, seed);
        if (parsed.ec != std::errc{} || parsed.ptr != end) {
          std::fprintf(stderr, "review: --seed expects a whole number from 0, found '%s'\n", optarg);
          return 2;
        }
        break;
      }
      case 'h': std::fputs(usage, stdout); return 0;
      default: std::fputs(usage, stderr); return 2;
    }
  }
  if (optind != argc) {
    std::fprintf(stderr, "review: did not expect '%s'\n%s", argv[optind], usage);
    return 2;
  }
  try {
    return review(out, map, seed);
  } catch (std::exception const& error) {
    std::fprintf(stderr, "review: %s\n", error.what());
    return 2;
  }
}
