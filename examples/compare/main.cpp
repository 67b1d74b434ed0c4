// compare: drives every method of the catalogue through the same scenes, and shows where each does well and where it
// fails, as it is known to.
//
//   compare [--map STEMS.csv] [--runs N] [--markdown]
#include <algorithm>
#include <cstdio>
#include <iterator>
#include <limits>
#include <string>
#include <vector>

#include <wend/lab/svg.hpp>
#include <wend/motion/pace.hpp>

#include "../stand.hpp"
#include "../table_options.hpp"
#include "scenes.hpp"
#include "slices.hpp"

namespace {

using namespace wend;

constexpr char const* usage =
    "usage: compare [--map STEMS.csv] [--runs N] [--markdown]\n"
    "  --map STEMS.csv  also through a stand of trees, columns x,y,diameter in metres\n"
    "  --runs N         runs a method and scene, each with noise of its own, from 1 to 10000 (default: 20)\n"
    "  --markdown       prints the tables as Markdown\n";

using table::Options;

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
  table::share_out(entrants.size(), [&](std::size_t i) { rows[i] = drive(entrants[i], scene, runs); });
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

}  // namespace

int main(int argc, char** argv) {
  Options const options = table::read_options("compare", usage, argc, argv);
  return table::run("compare", [&options] { return compare_all(options); });
}
