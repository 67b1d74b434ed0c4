// review: drives four policies through one world on the same noise, and prints what became of each; and where the world
// is small enough, what is proved about each for all states.
//
//   review [--out DIR] [--map STEMS.csv] [--seed N] [--runs-only]
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
#include <optional>
#include <string>
#include <system_error>
#include <thread>
#include <vector>

#include <getopt.h>

#include <wend/lab/arrival_map.hpp>
#include <wend/lab/arrival_picture.hpp>
#include <wend/lab/picture.hpp>
#include <wend/lab/prove.hpp>
#include <wend/lab/simulate.hpp>
#include <wend/lab/trace.hpp>

#include "../policies.hpp"
#include "../stand.hpp"
#include "cellar.hpp"

namespace {

using namespace wend;

constexpr char const* usage =
    "usage: review [--out DIR] [--map STEMS.csv] [--seed N] [--runs-only]\n"
    "  --out DIR        where pictures and tables go (default: review-out)\n"
    "  --map STEMS.csv  a stand of trees, columns x,y,diameter in metres (default: the cellar)\n"
    "  --seed N         chooses the noise (default: 1)\n"
    "  --runs-only      leaves out what takes seconds: the statements about all states\n";

struct Scene {
  std::string title;
  lab::World world;
  lab::Trip trip;
  lab::Region region{};
};

Scene crossing(std::string const& file) {
  stand::Stand const trees = stand::read(file);
  return {"A cart crosses a stand of " + std::to_string(trees.world.discs.size()) + " trees", trees.world, trees.trip};
}

/// What is known about one policy: a run, and where the scene is small enough, what holds for all states.
struct Reviewed {
  lab::DrawnRun drawn;
  std::optional<lab::ArrivalMap> arrivals;
  lab::Verdict verdict = lab::Verdict::undecided;
  long long boxes = 0;
};

constexpr int most_discs = 15;  // that are few enough for a proof in seconds
constexpr double kept_clear = 0.01;  // metres: the claim
constexpr double seen_within = 0.02;  // metres: a disc's edge may be seen so far off
constexpr double cell = 0.04;  // metres

template <typename Policy>
Reviewed look_at(char const* name, Policy const& policy, Scene const& scene, std::uint64_t seed, bool runs_only) {
  Loop<Policy, Ring<180>> const driven{.policy = policy, .sensing = cellar::ring};
  lab::Vehicle const cart = cellar::cart();
  Reviewed result{{name, lab::simulate(driven, cart, scene.world, scene.trip, seed, 0, true)}, {}};
  if (runs_only || scene.world.discs.size() > most_discs) {
    return result;
  }
  int const threads = std::max(1, static_cast<int>(std::thread::hardware_concurrency()));
  Loop<Policy> const loop{.policy = policy};
  lab::ProofOptions proof_options;
  proof_options.threads = threads;
  proof_options.error.radius = seen_within;
  auto const proof = lab::prove<most_discs>(loop, {cart.period * (1.0 + cart.jitter), cart.latency}, scene.world,
                                            scene.trip.goal, scene.region, {kept_clear}, proof_options);
  result.verdict = proof.verdict;
  result.boxes = proof.boxes;
  lab::ArrivalOptions arrival_options;
  arrival_options.finest = cell;
  arrival_options.threads = threads;
  result.arrivals = lab::arrival_map<most_discs>(policy, scene.world, scene.trip.goal, scene.region, arrival_options);
  return result;
}

void print_run(lab::DrawnRun const& drawn) {
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

void print_statements(std::vector<Reviewed> const& all) {
  std::printf("\nOver all states, by intervals:\n\n%-16s %-20s %12s %28s\n", "policy", "keeps 1 cm clear", "boxes",
              "arrival proved from, % area");
  for (Reviewed const& one : all) {
    std::printf("%-16s %-20s %12lld %28.1f\n", one.drawn.name.c_str(), text(one.verdict), one.boxes,
                100.0 * one.arrivals->share(lab::Arrival::proved));
  }
  std::printf(
      "\nKeeps clear: the loop, from any position and heading that is clear, with any memory, discs seen within 2 cm,\n"
      "period and latency as the cart's, rounding included. Arrival: the policy on a point machine that follows its\n"
      "course at once, exact discs, any memory, cells of 4 cm. What is not proved is undecided, not false.\n");
}

int review(std::string const& out, std::string const& map, std::uint64_t seed, bool runs_only) {
  Scene const scene =
      map.empty() ? Scene{"A tray cart crosses the mushroom cellar", cellar::world(), cellar::trip(), cellar::region}
                  : crossing(map);
  std::error_code why;  // before the work, so that it is not for nothing
  std::filesystem::create_directories(out, why);
  if (why || !std::filesystem::is_directory(out)) {
    throw lab::FileError(out, "expected a folder, or a place where one can be made" +
                                  (why ? " (" + why.message() + ")" : std::string()));
  }
  std::vector<Reviewed> const all{look_at("hard switch", policies::hard_switch, scene, seed, runs_only),
                                  look_at("two thresholds", policies::two_thresholds, scene, seed, runs_only),
                                  look_at("blend", policies::blended, scene, seed, runs_only),
                                  look_at("composed", policies::composed, scene, seed, runs_only)};
  std::printf("%s: %zu discs, %.1f m as the crow flies, seed %llu\n\n", scene.title.c_str(), scene.world.discs.size(),
              all.front().drawn.run.straight_length, static_cast<unsigned long long>(seed));
  std::printf("%-16s %-20s %7s %7s %10s %12s %12s\n", "policy", "ending", "time", "path", "clearance", "switches",
              "dwell");
  std::printf("%-16s %-20s %7s %7s %10s %12s %12s\n", "", "", "s", "ratio", "least, cm", "a minute", "least, s");
  std::vector<lab::DrawnRun> runs;
  for (Reviewed const& one : all) {
    print_run(one.drawn);
    runs.push_back(one.drawn);
  }
  if (all.front().arrivals) {
    print_statements(all);
  }

  auto const place = [&out](std::string name, char const* ending) {
    std::replace(name.begin(), name.end(), ' ', '-');
    return (std::filesystem::path(out) / (name + ending)).string();
  };
  lab::write_whole(place("all", ".svg"), lab::picture(scene.title, scene.world, scene.trip, runs));
  for (Reviewed const& one : all) {
    std::string const title = scene.title + ": " + one.drawn.name;
    lab::write_whole(place(one.drawn.name, ".svg"),
                     one.arrivals
                         ? lab::arrival_picture(title, *one.arrivals, scene.world, scene.trip.goal, {one.drawn})
                         : lab::picture(title, scene.world, scene.trip, {one.drawn}));
    lab::write_whole(place(one.drawn.name, ".csv"), lab::trace(one.drawn.run));
  }
  std::printf(
      "\nPictures and tables are in %s/.\n"
      "Runs are simulations: evidence, not proof; proofs hold for what they assume; neither is a safety function.\n"
      "A machine that can hurt someone needs protective devices and people qualified for them; local codes come\n"
      "first.\n",
      out.c_str());
  return 0;
}

}  // namespace

int main(int argc, char** argv) {
  std::string out = "review-out";
  std::string map;
  std::uint64_t seed = 1;
  bool runs_only = false;
  option const options[] = {{"out", required_argument, nullptr, 'o'},  {"map", required_argument, nullptr, 'm'},
                            {"seed", required_argument, nullptr, 's'}, {"runs-only", no_argument, nullptr, 'r'},
                            {"help", no_argument, nullptr, 'h'},       {nullptr, 0, nullptr, 0}};
  for (int given = 0; (given = getopt_long(argc, argv, "", options, nullptr)) != -1;) {
    switch (given) {
      case 'o': out = optarg; break;
      case 'm': map = optarg; break;
      case 'r': runs_only = true; break;
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
    return review(out, map, seed, runs_only);
  } catch (std::exception const& error) {
    std::fprintf(stderr, "review: %s\n", error.what());
    return 2;
  }
}
