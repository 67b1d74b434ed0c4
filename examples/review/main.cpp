// review: the paper for the meeting before a machine drives. Four policies in one scene: does it arrive, how near does
// it come, does it dither, how sure are we?
//
//   review [--scene FILE | --map STEMS.csv] [--seed N] [--runs N] [--threads N] [--runs-only] [--json] [--out DIR]
//   review --tune [...]
//
// Without a scene: the cellar of cellar.hpp. --map: a stand of trees given as x, y, diameter in metres, crossed from
// west to east. Writes DIR/review.html, the page; review.json; runs.csv, a row for each drawn run; <policy>.csv and
// .svg, the scene's own trip; and all.svg.
#include <algorithm>
#include <cstdint>
#include <cstdio>
#include <exception>
#include <filesystem>
#include <string>
#include <string_view>
#include <system_error>
#include <thread>
#include <vector>

#include <getopt.h>

#include <wend/lab/arrival_picture.hpp>
#include <wend/lab/picture.hpp>
#include <wend/lab/progress_bar.hpp>
#include <wend/lab/review.hpp>
#include <wend/lab/review_json.hpp>
#include <wend/lab/review_page.hpp>
#include <wend/lab/row_table.hpp>
#include <wend/lab/trace.hpp>

#include "../given.hpp"
#include "../policies.hpp"
#include "../whole_number.hpp"
#include "print.hpp"
#include "tuning.hpp"

namespace {

using namespace wend;

constexpr char const* usage =
    "usage: review [--scene FILE | --map STEMS.csv] [--seed N] [--runs N] [--threads N] [--runs-only] [--json] [--out "
    "DIR]\n"
    "       review --tune [--scene FILE | --map STEMS.csv] [--seed N] [--runs N] [--threads N]\n"
    "  --scene FILE     a scene of your own (its words are in lab/scene_file.hpp)\n"
    "  --map STEMS.csv  a stand of trees, columns x,y,diameter in metres (default: the cellar)\n"
    "  --seed N         chooses starts, goals and noise (default: 1)\n"
    "  --runs N         drawn runs of each policy (default: 5000), of each candidate of a tuning (400)\n"
    "  --threads N      default: as many as there are cores; changes nothing but the time\n"
    "  --runs-only      leaves out what takes seconds: the statements about all states\n"
    "  --tune           searches thresholds of the composed policy: quickest, as long as it arrives and keeps clear\n"
    "  --json           prints JSON instead of tables\n"
    "  --out DIR        where page, pictures and tables go (default: review-out)\n";

struct Wanted {
  std::string scene;
  std::string map;
  std::string out = "review-out";
  std::uint64_t seed = 1;
  std::uint64_t runs = 0;  // as many as usual
  std::uint64_t threads = std::max(1U, std::thread::hardware_concurrency());
  bool runs_only = false;
  bool json = false;
  bool tune = false;
};

// The command line again, but for what changes only where results go.
std::string same_command(char const* program, Wanted const& wanted) {
  std::string line = program;
  if (!wanted.scene.empty()) {
    line += " --scene " + wanted.scene;
  } else if (!wanted.map.empty()) {
    line += " --map " + wanted.map;
  }
  return line + " --seed " + std::to_string(wanted.seed) + " --runs " + std::to_string(wanted.runs);
}

// All four policies, one after another, until there is no more or somebody wants an end.
lab::Review look_at(lab::SceneFile const& scene, Wanted const& wanted) {
  lab::Review review{scene.title, scene.world, scene.trip, scene.region, wanted.seed, wanted.runs, true, {}};
  lab::ProgressBar bar("review");
  lab::ReviewOptions options;
  options.seed = wanted.seed;
  options.runs = wanted.runs;
  options.threads = static_cast<int>(wanted.threads);
  options.all_states = !wanted.runs_only;
  options.stop = &lab::stop_on_interrupt();
  lab::Scenes const drawn = scene.scenes();
  options.progress = [&](double share) {
    bar(static_cast<std::uint64_t>(1000.0 * (static_cast<double>(review.policies.size()) + share)), 4000);
  };
  auto const look = [&](char const* name, auto const& policy) {
    if (options.stop->load()) {
      review.complete = false;
      return;
    }
    lab::add_review(review, name, policy, cellar::ring, scene.vehicle, drawn, scene.claims, options);
  };
  look("hard switch", policies::hard_switch);
  look("two thresholds", policies::two_thresholds);
  look("blend", policies::blended);
  look("composed", policies::composed);
  return review;
}

void write_all(lab::Review const& review, lab::SceneFile const& scene, Wanted const& wanted) {
  auto const place = [&wanted](std::string name, char const* ending) {
    std::replace(name.begin(), name.end(), ' ', '-');
    return (std::filesystem::path(wanted.out) / (name + ending)).string();
  };
  std::vector<std::string> const again{same_command("build/examples/review", wanted),
                                       "# one drawn run of the composed policy alone, with its trace:",
                                       same_command("build/examples/fleet", wanted) + " --run NUMBER"};
  lab::write_whole(place("review", ".html"), lab::review_page(review, again, scene.vehicle.radius));
  lab::write_whole(place("review", ".json"), lab::review_json(review) + "\n");
  std::string rows = lab::row_table_names;
  std::vector<lab::DrawnRun> runs;
  for (lab::PolicyReview const& policy : review.policies) {
    rows += lab::row_table(policy.name, policy.rows);
    lab::DrawnRun const drawn{policy.name, policy.run};
    std::string const title = review.title + ": " + policy.name;
    lab::write_whole(place(policy.name, ".svg"),
                     policy.arrivals
                         ? lab::arrival_picture(title, *policy.arrivals, review.world, review.trip.goal, {drawn})
                         : lab::picture(title, review.world, review.trip, {drawn}));
    lab::write_whole(place(policy.name, ".csv"), lab::trace(policy.run));
    runs.push_back(drawn);
  }
  lab::write_whole(place("runs", ".csv"), rows);
  lab::write_whole(place("all", ".svg"), lab::picture(review.title, review.world, review.trip, runs));
}

int make_review(Wanted const& wanted) {
  lab::SceneFile const scene = given::scene(wanted.scene, wanted.map);
  if (wanted.tune) {
    return review::tune(scene, {wanted.runs, wanted.seed, static_cast<int>(wanted.threads)});
  }
  std::error_code why;  // before the work, so that it is not for nothing
  std::filesystem::create_directories(wanted.out, why);
  if (why || !std::filesystem::is_directory(wanted.out)) {
    throw lab::FileError(wanted.out, "expected a folder, or a place where one can be made" +
                                         (why ? " (" + why.message() + ")" : std::string()));
  }
  lab::Review const review = look_at(scene, wanted);
  write_all(review, scene, wanted);
  if (wanted.json) {
    std::printf("%s\n", lab::review_json(review).c_str());
  } else {
    review::print(review);
    std::printf("\nThe page is %s/review.html; pictures and tables are beside it.\n%s", wanted.out.c_str(),
                review::cautions);
  }
  if (!review.complete) {
    std::fprintf(stderr, "review: interrupted: the page tells of what was done so far\n");
    return 130;
  }
  return 0;
}

}  // namespace

int main(int argc, char** argv) {
  Wanted wanted;
  option const options[] = {{"scene", required_argument, nullptr, 'c'},
                            {"map", required_argument, nullptr, 'm'},
                            {"seed", required_argument, nullptr, 's'},
                            {"runs", required_argument, nullptr, 'n'},
                            {"threads", required_argument, nullptr, 't'},
                            {"runs-only", no_argument, nullptr, 'r'},
                            {"tune", no_argument, nullptr, 'u'},
                            {"json", no_argument, nullptr, 'j'},
                            {"out", required_argument, nullptr, 'o'},
                            {"help", no_argument, nullptr, 'h'},
                            {nullptr, 0, nullptr, 0}};
  for (int letter = 0; (letter = getopt_long(argc, argv, "", options, nullptr)) != -1;) {
    switch (letter) {
      case 'c': wanted.scene = optarg; break;
      case 'm': wanted.map = optarg; break;
      case 's': wanted.seed = whole_number("review", "--seed", optarg, 0); break;
      case 'n': wanted.runs = whole_number("review", "--runs", optarg, 1); break;
      case 't': wanted.threads = whole_number("review", "--threads", optarg, 1, 1024); break;
      case 'r': wanted.runs_only = true; break;
      case 'j': wanted.json = true; break;
      case 'u': wanted.tune = true; break;
      case 'o': wanted.out = optarg; break;
      case 'h': std::fputs(usage, stdout); return 0;
      default: std::fputs(usage, stderr); return 2;
    }
  }
  if (optind != argc) {
    std::fprintf(stderr, "review: did not expect '%s'\n%s", argv[optind], usage);
    return 2;
  }
  if (wanted.runs == 0) {
    wanted.runs = wanted.tune ? 400 : 5000;
  }
  try {
    int const result = make_review(wanted);
    if (std::fflush(stdout) != 0) {
      std::fprintf(stderr, "review: could not write to the output\n");
      return 2;
    }
    return result;
  } catch (std::exception const& error) {
    std::fprintf(stderr, "review: %s\n", error.what());
    return 2;
  }
}
