// compare: drives every method of the catalogue through the same scenes, and shows where each does well and where it
// fails, as it is known to.
//
//   compare [--map STEMS.csv] [--runs N] [--markdown]
#include <algorithm>
#include <charconv>
#include <cstdio>
#include <cstring>
#include <exception>
#include <iterator>
#include <limits>
#include <string>
#include <thread>
#include <vector>

#include <getopt.h>

#include <wend/lab/svg.hpp>
#include <wend/motion/pace.hpp>

#include "../stand.hpp"
#include "scenes.hpp"
#include "slices.hpp"

namespace {

using namespace wend;

constexpr char const* usage =
    "usage: compare [--map STEMS.csv] [--runs N] [--markdown]\n"
    "  --map STEMS.csv  also through a stand of trees, columns x,y,diameter in metres\n"
    "  --runs N         runs a method and scene, each with noise of its own, from 1 to 10000 (default: 20)\n"
    "  --markdown       prints the tables as Markdown\n";

struct Options {
  std::string map;
  int runs = 20;
  bool markdown = false;
};

/// What became of a method's runs through one scene.
struct Row {
  int arrived = 0;
  int contacts = 0;    ///< made by the machine, at over 1 cm/s
  int run_into = 0;    ///< made by a disc that moved, while the machine stood
  double time_ratio = 0.0;   ///< mean over the runs that arrived: time over that of the straight line at top speed
  double clearance = std::numeric_limits<double>::infinity();  ///< metres, least over all runs
  double switches = 0.0;  ///< mean a run
};

lab::Vehicle machine() {
  lab::Vehicle machine;
  machine.jitter = 0.1;
  machine.position_noise = 0.01;
  machine.heading_noise = 0.01;
  return machine;
}

Row drive(compare::Entrant const& entrant, compare::Scene const& scene, int runs) {
  Row row;
  double const top_speed = static_cast<double>(Pace{}.top_speed);
  for (int k = 0; k < runs; ++k) {
    lab::Run const run = entrant.drive(machine(), scene.world, scene.trip, static_cast<std::uint64_t>(k));
    if (run.ending == lab::Ending::arrived) {
      ++row.arrived;
      row.time_ratio += run.time * top_speed / run.straight_length;
    }
    if (run.ending == lab::Ending::contact) {
      ++(run.contact_speed > 0.01 ? row.contacts : row.run_into);
    }
    row.clearance = std::min(row.clearance, run.least_clearance);
    row.switches += static_cast<double>(run.switches) / runs;
  }
  row.time_ratio /= std::max(row.arrived, 1);
  return row;
}

/// Every method through a scene; the methods are shared out among the machine's cores.
std::vector<Row> drive_all(std::vector<compare::Entrant> const& entrants, compare::Scene const& scene, int runs) {
  std::vector<Row> rows(entrants.size());
  std::size_t const threads = std::max(1U, std::thread::hardware_concurrency());
  std::vector<std::jthread> crew;
  for (std::size_t t = 0; t < threads; ++t) {
    crew.emplace_back([&, t] {
      for (std::size_t i = t; i < entrants.size(); i += threads) {
        rows[i] = drive(entrants[i], scene, runs);
      }
    });
  }
  crew.clear();  // waits
  return rows;
}

void print(std::vector<compare::Entrant> const& entrants, compare::Scene const& scene, std::vector<Row> const& rows,
           Options const& options) {
  bool const markdown = options.markdown;
  std::printf(markdown ? "\n**%s**: %s.\n\n" : "\n%s: %s\n\n", scene.name.c_str(), scene.what.c_str());
  char const* const head = markdown ? "| %s | %s | %s | %s | %s | %s | %s |\n" : "%-26s %9s %9s %9s %10s %13s %9s\n";
  std::printf(head, "method", "arrived", "contacts", "run into", "time ratio", "clearance, cm", "switches");
  if (markdown) {
    std::printf("|---|---:|---:|---:|---:|---:|---:|\n");
  }
  for (std::size_t i = 0; i < rows.size(); ++i) {
    Row const& row = rows[i];
    std::string const ratio = row.arrived == 0 ? "-" : lab::detail::fixed(row.time_ratio, 2);
    std::string const clearance = row.clearance > 1e3 ? "-" : lab::detail::fixed(100.0 * row.clearance, 0);
    std::printf(head, entrants[i].name.c_str(),
                (std::to_string(row.arrived) + "/" + std::to_string(options.runs)).c_str(),
                std::to_string(row.contacts).c_str(), std::to_string(row.run_into).c_str(), ratio.c_str(),
                clearance.c_str(), lab::detail::fixed(row.switches, 1).c_str());
  }
}

std::vector<compare::Entrant> entrants() {
  std::vector<compare::Entrant> all(catalogue::size);
  for (auto const& slice : {compare::slice_0(), compare::slice_1(), compare::slice_2(), compare::slice_3()}) {
    for (auto const& [place, entrant] : slice) {
      all[place] = entrant;
    }
  }
  return all;
}

int compare_all(Options const& options) {
  std::vector<compare::Scene> scenes = compare::scenes();
  if (!options.map.empty()) {
    stand::Stand const trees = stand::read(options.map);
    scenes.push_back({"trees", "a stand of " + std::to_string(trees.world.discs.size()) + " trees, crossed lengthwise",
                      trees.world, trees.trip});
  }
  std::vector<compare::Entrant> const all = entrants();
  std::vector<compare::Entrant> anywhere;
  std::copy_if(all.begin(), all.end(), std::back_inserter(anywhere), [](auto const& e) { return !e.placed; });
  std::printf("Each of %zu methods, %d runs a scene, told where the discs within 6 m are and how they move.\n",
              all.size(), options.runs);
  for (compare::Scene const& scene : scenes) {
    auto const& who = scene.name == "trees" ? anywhere : all;
    print(who, scene, drive_all(who, scene, options.runs), options);
  }
  std::printf(
      "\nContacts: made by the machine as it drove; run into: by a disc that moved, while the machine stood.\n"
      "Time ratio: mean time of the runs that arrived over that of the straight line at top speed. Clearance: the\n"
      "least of all runs, body edge to disc edge. Switches: guards that changed their mind, mean a run. What did not\n"
      "arrive and touched nothing stood still or went round and round until its time was up.\n"
      "Simulations: evidence, not proof, and no safety function.\n");
  return 0;
}

bool read_count(char const* text, int& count) {
  char const* const end = text + std::strlen(text);
  auto const parsed = std::from_chars(text, end, count);
  return parsed.ec == std::errc{} && parsed.ptr == end && count >= 1 && count <= 10000;
}

}  // namespace

int main(int argc, char** argv) {
  Options options;
  option const known[] = {{"map", required_argument, nullptr, 'm'},
                          {"runs", required_argument, nullptr, 'n'},
                          {"markdown", no_argument, nullptr, 'd'},
                          {"help", no_argument, nullptr, 'h'},
                          {nullptr, 0, nullptr, 0}};
  for (int given = 0; (given = getopt_long(argc, argv, "", known, nullptr)) != -1;) {
    switch (given) {
      case 'm': options.map = optarg; break;
      case 'd': options.markdown = true; break;
      case 'n':
        if (!read_count(optarg, options.runs)) {
          std::fprintf(stderr, "compare: --runs expects a whole number from 1 to 10000, found '%s'\n", optarg);
          return 2;
        }
        break;
      case 'h': std::fputs(usage, stdout); return 0;
      default: std::fputs(usage, stderr); return 2;
    }
  }
  if (optind != argc) {
    std::fprintf(stderr, "compare: did not expect '%s'\n%s", argv[optind], usage);
    return 2;
  }
  try {
    return compare_all(options);
  } catch (std::exception const& error) {
    std::fprintf(stderr, "compare: %s\n", error.what());
    return 2;
  }
}
