// faults: lets one thing after another go wrong with the cart of the cellar, and shows what the loop does about it.
//
//   faults [--map STEMS.csv] [--runs N] [--markdown]
#include <algorithm>
#include <cstdio>
#include <limits>
#include <map>
#include <string>
#include <vector>

#include <wend/lab/simulate.hpp>
#include <wend/lab/svg.hpp>

#include "../policies.hpp"
#include "../cellar.hpp"
#include "../stand.hpp"
#include "../table_options.hpp"
#include "faults.hpp"

namespace {

using namespace wend;

constexpr char const* usage =
    "usage: faults [--map STEMS.csv] [--runs N] [--markdown]\n"
    "  --map STEMS.csv  in a stand of trees, columns x,y,diameter in metres (default: the cellar)\n"
    "  --runs N         runs a fault, each with noise of its own, from 1 to 10000 (default: 20)\n"
    "  --markdown       prints the table as Markdown\n";

using table::Options;

struct Scene {
  lab::World world;
  lab::Trip trip;
};

constexpr Loop<decltype(policies::composed), Ring<180>> loop{.policy = policies::composed, .sensing = cellar::ring};

/// What became of the runs with one fault.
struct Outcome {
  int arrived = 0;
  int contacts = 0;
  double clearance = std::numeric_limits<double>::infinity();  ///< metres, least of all runs from the onset on
  double noticed_after = 0.0;  ///< seconds, the longest of the runs that noticed
  std::map<std::string, int> noticed_as;  ///< runs by the first status that was not ok
};

using FirstTimes = std::map<Status, double>;  // seconds

// When each status but "all is well" first came, from the onset on.
FirstTimes first_times(lab::Run const& run) {
  FirstTimes first;
  for (lab::Tick const& tick : run.ticks) {
    if (tick.time >= faults::onset && tick.status != Status::ok && tick.status != Status::arrived) {
      first.emplace(tick.status, tick.time);
    }
  }
  return first;
}

// A disc that lies well ahead, for a goal to be moved into.
Vec2<double> some_obstacle(Scene const& scene) {
  Vec2<double> const middle = 0.5 * (scene.trip.start.position + scene.trip.goal);
  auto const nearer = [&middle](lab::WorldDisc const& a, lab::WorldDisc const& b) {
    return (a.disc.centre - middle).norm() < (b.disc.centre - middle).norm();
  };
  return std::min_element(scene.world.discs.begin(), scene.world.discs.end(), nearer)->disc.centre;
}

lab::Run drive(faults::Fault const& fault, Scene const& scene, int k) {
  lab::Vehicle cart = cellar::cart();
  cart.watchdog = fault.watchdog;
  faults::FromOnset mishap(fault.make(some_obstacle(scene)));
  return lab::simulate(loop, cart, scene.world, scene.trip, 1, static_cast<std::uint64_t>(k), true, &mishap);
}

// `usual`: what the same runs give without any fault. A status says that something is wrong when it is not among those,
// or comes within a second.
Outcome suffer(faults::Fault const& fault, Scene const& scene, std::vector<FirstTimes> const& usual) {
  Outcome outcome;
  for (std::size_t k = 0; k < usual.size(); ++k) {
    lab::Run const run = drive(fault, scene, static_cast<int>(k));
    outcome.arrived += run.ending == lab::Ending::arrived ? 1 : 0;
    outcome.contacts += run.ending == lab::Ending::contact ? 1 : 0;
    outcome.clearance = std::min(outcome.clearance, run.least_clearance);
    Status noticed = Status::ok;
    double after = 1e9;
    for (auto const& [status, time] : first_times(run)) {
      bool const tells = usual[k].count(status) == 0 || time < faults::onset + 1.0;
      if (tells && time - faults::onset < after) {
        noticed = status;
        after = time - faults::onset;
      }
    }
    ++outcome.noticed_as[noticed == Status::ok ? "-" : text(noticed)];
    if (noticed != Status::ok) {
      outcome.noticed_after = std::max(outcome.noticed_after, after);
    }
  }
  return outcome;
}

std::string most_often(std::map<std::string, int> const& counts, int runs) {
  auto const most =
      std::max_element(counts.begin(), counts.end(), [](auto const& a, auto const& b) { return a.second < b.second; });
  return most->second == runs ? most->first : most->first + " (" + std::to_string(most->second) + ")";
}

/// Whether every fault that has to be survived was.
bool print(std::vector<faults::Fault> const& all, std::vector<Outcome> const& outcomes, Options const& options) {
  char const* const row = options.markdown ? "| %s | %s | %s | %s | %s | %s |\n" : "%-44s %-14s %8s %8s %9s %13s\n";
  std::printf(row, "fault", "first status", "after, s", "arrived", "contacts", "clearance, cm");
  if (options.markdown) {
    std::printf("|---|---|---:|---:|---:|---:|\n");
  }
  std::vector<std::string> reasons;
  bool survived = true;
  for (std::size_t i = 0; i < all.size(); ++i) {
    Outcome const& outcome = outcomes[i];
    std::string contacts = std::to_string(outcome.contacts);
    if (!all[i].why_not.empty()) {
      auto const known = std::find(reasons.begin(), reasons.end(), all[i].why_not);
      contacts += " [" + std::to_string(known - reasons.begin() + 1) + "]";
      if (known == reasons.end()) {
        reasons.push_back(all[i].why_not);
      }
    } else if (outcome.contacts > 0) {
      survived = false;
    }
    bool const noticed = outcome.noticed_as.size() > 1 || outcome.noticed_as.count("-") == 0;
    std::printf(row, all[i].name.c_str(), most_often(outcome.noticed_as, options.runs).c_str(),
                noticed ? lab::detail::fixed(outcome.noticed_after, 2).c_str() : "-",
                (std::to_string(outcome.arrived) + "/" + std::to_string(options.runs)).c_str(), contacts.c_str(),
                lab::detail::fixed(100.0 * outcome.clearance, 0).c_str());
  }
  std::printf("\nWhat the loop cannot answer for:\n");
  for (std::size_t i = 0; i < reasons.size(); ++i) {
    std::printf("%s[%zu] %s.\n", options.markdown ? "- " : "  ", i + 1, reasons[i].c_str());
  }
  return survived;
}

int try_all(Options const& options) {
  Scene scene{cellar::world(), cellar::trip()};
  if (!options.map.empty()) {
    stand::Stand const trees = stand::read(options.map);
    scene = {trees.world, trees.trip};
  }
  std::vector<faults::Fault> const all = faults::all();
  std::vector<Outcome> outcomes(all.size());
  std::vector<FirstTimes> usual;
  for (int k = 0; k < options.runs; ++k) {
    usual.push_back(first_times(drive(all.front(), scene, k)));
  }
  table::share_out(all.size(), [&](std::size_t i) { outcomes[i] = suffer(all[i], scene, usual); });
  std::printf("A cart crosses %s, composed policy, %d runs a fault; each begins after %.0f s.\n\n",
              options.map.empty() ? "the cellar" : "the stand", options.runs, faults::onset);
  bool const survived = print(all, outcomes, options);
  std::printf(
      "\nFirst status: the first that the same run does not give without the fault, or that comes within a second of "
      "it,\n"
      "and in how many runs where not in all; after: the longest that took. Simulations are evidence, not proof, and\n"
      "wend is no safety function: a machine that can hurt someone needs protective devices that do not depend on it,\n"
      "and people qualified for them; local codes come first.\n");
  if (!survived) {
    std::fprintf(stderr, "faults: a fault that has to be survived led to a contact\n");
    return 1;
  }
  return 0;
}

}  // namespace

int main(int argc, char** argv) {
  Options const options = table::read_options("faults", usage, argc, argv);
  return table::run("faults", [&options] { return try_all(options); });
}
