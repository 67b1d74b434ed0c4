// fleet: thousands of runs of one policy, in parts, on as many machines as there are; and the parts put together again.
//
//   fleet [--scene FILE | --map STEMS.csv] [--runs N] [--seed N] [--threads N] [--out DIR]     all runs in one process
//   fleet --shard I/N [...]       part I of N, from 1: for any job array or queue; whole parts are not run again
//   mpirun -n N fleet --mpi [...] the same, a part a rank
//   fleet --merge FILES... [...]  puts parts together and says what became of the runs
//   fleet --run K [...]           one run alone, with its trace
//
// A tray cart in the cellar of ../cellar.hpp, or in a stand of trees given as x, y, diameter. Options that say what is
// run
// (--scene, --map, --runs, --seed) have to be the same for the parts and for the merge.
#include <algorithm>
#include <cstdint>
#include <cstdio>
#include <cstdlib>
#include <exception>
#include <filesystem>
#include <functional>
#include <optional>
#include <string>
#include <string_view>
#include <system_error>
#include <thread>
#include <utility>
#include <vector>

#include <getopt.h>

#include <wend/lab/campaign.hpp>
#include <wend/lab/progress_bar.hpp>
#include <wend/lab/shards.hpp>
#include <wend/lab/tally.hpp>
#include <wend/lab/trace.hpp>

#include "../given.hpp"
#include "../policies.hpp"
#include "../whole_number.hpp"
#include "ranks.hpp"

namespace {

using namespace wend;

constexpr char const* usage =
    "usage: fleet [--scene FILE | --map STEMS.csv] [--runs N] [--seed N] [--threads N] [--out DIR]\n"
    "             [--shard I/N | --mpi | --merge FILES... | --run K]\n"
    "  --scene FILE     a scene of your own (its words are in lab/scene_file.hpp)\n"
    "  --map STEMS.csv  a stand of trees, columns x,y,diameter in metres (default: the cellar)\n"
    "  --runs N         runs in all (default: 10000)\n"
    "  --seed N         chooses starts, goals and noise (default: 1)\n"
    "  --threads N      of this process (default: as many as there are cores)\n"
    "  --out DIR        where files of rows and traces go (default: fleet-out)\n"
    "  --shard I/N      drives part I of N only, counted from 1, unless its file is there and whole\n"
    "  --mpi            under mpirun: drives the part of this rank\n"
    "  --merge FILES... puts the files of all parts together\n"
    "  --run K          drives run K alone, and writes its trace\n";

enum class Task { all, shard, mpi, merge, run };

struct Wanted {
  Task task = Task::all;
  std::string scene;
  std::string map;
  std::uint64_t runs = 10000;
  std::uint64_t seed = 1;
  std::uint64_t run = 0;
  std::uint64_t threads = std::max(1U, std::thread::hardware_concurrency());
  std::string out = "fleet-out";
  lab::Shard shard;
  std::vector<std::string> files;
};

auto loop_in(lab::SceneFile const& scene) {
  return lab::fitted(Loop<decltype(policies::composed)>{.policy = policies::composed}, scene.vehicle);
}

lab::Shard shard_of(std::string_view text) {
  std::size_t const slash = text.find('/');
  if (slash == text.npos) {
    std::fprintf(stderr, "fleet: --shard expects I/N, such as 2/7, found '%.*s'\n", static_cast<int>(text.size()),
                 text.data());
    std::exit(2);
  }
  lab::Shard const shard{whole_number("fleet", "--shard", text.substr(0, slash), 1),
                         whole_number("fleet", "--shard", text.substr(slash + 1), 1)};
  if (shard.number > shard.of) {
    std::fprintf(stderr, "fleet: --shard expects a part from 1 to %llu\n", static_cast<unsigned long long>(shard.of));
    std::exit(2);
  }
  return shard;
}

std::string percent(double share) { return lab::detail::fixed(100.0 * share, 3) + " %"; }

void print_share(char const* what, std::uint64_t count, std::uint64_t runs) {
  lab::Bounds const exact = lab::clopper_pearson(count, runs);
  lab::Bounds const wilson = lab::wilson(count, runs);
  std::printf("%-10s %9llu of %llu: %s; 95 %%: %s to %s (Clopper-Pearson), %s to %s (Wilson)\n", what,
              static_cast<unsigned long long>(count), static_cast<unsigned long long>(runs),
              percent(static_cast<double>(count) / static_cast<double>(runs)).c_str(), percent(exact.low).c_str(),
              percent(exact.high).c_str(), percent(wilson.low).c_str(), percent(wilson.high).c_str());
}

void print_spread(char const* what, lab::Spread const& s) {
  std::printf("%-22s %9.3f %9.3f %9.3f %9.3f %9.3f\n", what, s.least, s.low, s.median, s.high, s.most);
}

void print_rows(std::vector<lab::RunRow> const& rows, Wanted const& wanted) {
  if (rows.empty()) {
    std::printf("no run\n");
    return;
  }
  lab::Tally const t = lab::tally(rows);
  print_share("arrived", t.arrived, t.runs);
  print_share("contact", t.contacts, t.runs);
  print_share("time out", t.time_outs, t.runs);
  std::printf("contact, one-sided: no more than %s with 95 %% confidence\n",
              percent(lab::upper_bound_on_probability(t.contacts, t.runs)).c_str());
  std::printf("%-22s %9s %9s %9s %9s %9s\n", "", "least", "5 %", "median", "95 %", "most");
  print_spread("least clearance, m", t.clearance);
  print_spread("time of arrivals, s", t.time);
  print_spread("switches a run", t.switches);
  std::printf("runs to look at first:\n");
  for (std::size_t const i : lab::worst_runs(rows, 5)) {
    std::printf("  --seed %llu --run %llu: %s, clearance %.3f m\n", static_cast<unsigned long long>(wanted.seed),
                static_cast<unsigned long long>(rows[i].run), text(rows[i].ending), rows[i].least_clearance);
  }
  std::printf(
      "Simulated runs of an invented machine: evidence about this policy in these scenes, and no safety function.\n");
}

std::string file_of(Wanted const& wanted, lab::Shard const& shard) {
  return (std::filesystem::path(wanted.out) /
          ("shard-" + std::to_string(shard.number) + "-of-" + std::to_string(shard.of) + ".rows"))
      .string();
}

lab::CampaignIdentity identity_of(Wanted const& wanted, lab::SceneFile const& scene) {
  return {lab::campaign_fingerprint(loop_in(scene), scene.vehicle, scene.scenes(), wanted.runs, wanted.seed),
          wanted.seed, wanted.runs};
}

// Whether a shard's file is there and whole, and of this campaign.
bool is_there(std::string const& file, lab::CampaignIdentity const& identity, lab::Shard const& shard) {
  if (!std::filesystem::exists(file)) {
    return false;
  }
  try {
    lab::RowFile const rows = lab::parse_rows(file, lab::read_whole(file));
    return rows.complete && rows.identity == identity && rows.shard == shard;
  } catch (lab::FileError const&) {
    return false;
  }
}

int drive(Wanted const& wanted, lab::Shard const& shard) {
  lab::SceneFile const scene = given::scene(wanted.scene, wanted.map);
  lab::CampaignIdentity const identity = identity_of(wanted, scene);
  std::string const file = file_of(wanted, shard);
  if (wanted.task != Task::all && is_there(file, identity, shard)) {
    std::printf("%s is there and whole\n", file.c_str());
    return 0;
  }
  std::filesystem::create_directories(wanted.out);
  lab::ProgressBar bar("shard " + std::to_string(shard.number) + "/" + std::to_string(shard.of));
  lab::CampaignOptions options;
  options.first = shard.first(wanted.runs);
  options.threads = static_cast<int>(wanted.threads);
  options.stop = &lab::stop_on_interrupt();
  options.progress = std::ref(bar);
  lab::Campaign campaign =
      lab::campaign(loop_in(scene), scene.vehicle, scene.scenes(), shard.size(wanted.runs), wanted.seed, options);
  bar.clear();
  lab::RowFile const rows{identity, shard, campaign.complete, std::move(campaign.rows)};
  if (!rows.complete && is_there(file, identity, shard)) {
    std::fprintf(stderr, "fleet: interrupted; %s is whole from before, and is kept\n", file.c_str());
    return 130;
  }
  lab::write_surely(file, lab::text_of(rows));
  if (!rows.complete) {
    std::fprintf(stderr, "fleet: interrupted; %s has %llu of %llu runs\n", file.c_str(),
                 static_cast<unsigned long long>(rows.rows.size()),
                 static_cast<unsigned long long>(shard.size(wanted.runs)));
  }
  if (wanted.task == Task::all) {
    print_rows(rows.rows, wanted);
  }
  std::printf("%s\n", file.c_str());
  return rows.complete ? 0 : 130;
}

int merge(Wanted const& wanted) {
  lab::Merged const merged = lab::merge(wanted.files, identity_of(wanted, given::scene(wanted.scene, wanted.map)));
  for (std::string const& problem : merged.problems) {
    std::fprintf(stderr, "fleet: %s\n", problem.c_str());
  }
  for (lab::Shard const& shard : merged.run_again) {
    std::fprintf(stderr, "fleet: run again: --shard %llu/%llu\n", static_cast<unsigned long long>(shard.number),
                 static_cast<unsigned long long>(shard.of));
  }
  print_rows(merged.whole.rows, wanted);
  if (!merged.complete()) {
    return 1;
  }
  std::filesystem::create_directories(wanted.out);
  std::string const file = file_of(wanted, {1, 1});
  lab::write_surely(file, lab::text_of(merged.whole));
  std::printf("%s\n", file.c_str());
  return 0;
}

int run_alone(Wanted const& wanted) {
  lab::SceneFile const scene = given::scene(wanted.scene, wanted.map);
  lab::Replay const replay = lab::replay_run(loop_in(scene), scene.vehicle, scene.scenes(), wanted.run, wanted.seed);
  std::filesystem::create_directories(wanted.out);
  std::string const file =
      (std::filesystem::path(wanted.out) / ("run-" + std::to_string(wanted.run) + ".csv")).string();
  lab::write_surely(file, lab::trace(replay.run));
  lab::RunRow const& row = replay.row;
  std::printf("run %llu: %s after %.3f s, %.3f m, least clearance %.4f m, %d switches\n%s\n",
              static_cast<unsigned long long>(row.run), text(row.ending), row.time, row.path_length,
              row.least_clearance, row.switches, file.c_str());
  return 0;
}

int do_task(Wanted const& wanted, int& argc, char**& argv) {
  switch (wanted.task) {
    case Task::all: return drive(wanted, {1, 1});
    case Task::shard: return drive(wanted, wanted.shard);
    case Task::merge: return merge(wanted);
    case Task::run: return run_alone(wanted);
    case Task::mpi: break;
  }
  ranks::Ranks const ranks(argc, argv);
  auto const shard = ranks.shard();
  if (!shard) {
    std::fprintf(stderr, "fleet: this program was built without MPI; use --shard I/N\n");
    return 2;
  }
  return drive(wanted, *shard);
}

}  // namespace

int main(int argc, char** argv) {
  Wanted wanted;
  bool threads_given = false;
  option const options[] = {{"scene", required_argument, nullptr, 'c'},   {"map", required_argument, nullptr, 'm'},
                            {"runs", required_argument, nullptr, 'n'},    {"seed", required_argument, nullptr, 's'},
                            {"threads", required_argument, nullptr, 't'}, {"out", required_argument, nullptr, 'o'},
                            {"shard", required_argument, nullptr, 'i'},   {"mpi", no_argument, nullptr, 'p'},
                            {"merge", no_argument, nullptr, 'g'},         {"run", required_argument, nullptr, 'k'},
                            {"help", no_argument, nullptr, 'h'},          {nullptr, 0, nullptr, 0}};
  for (int letter = 0; (letter = getopt_long(argc, argv, "", options, nullptr)) != -1;) {
    switch (letter) {
      case 'c': wanted.scene = optarg; break;
      case 'm': wanted.map = optarg; break;
      case 'n': wanted.runs = whole_number("fleet", "--runs", optarg, 1); break;
      case 's': wanted.seed = whole_number("fleet", "--seed", optarg, 0); break;
      case 't':
        wanted.threads = std::min<std::uint64_t>(whole_number("fleet", "--threads", optarg, 1), 1024);
        threads_given = true;
        break;
      case 'o': wanted.out = optarg; break;
      case 'i':
        wanted.task = Task::shard;
        wanted.shard = shard_of(optarg);
        break;
      case 'p': wanted.task = Task::mpi; break;
      case 'g': wanted.task = Task::merge; break;
      case 'k':
        wanted.task = Task::run;
        wanted.run = whole_number("fleet", "--run", optarg, 0);
        break;
      case 'h': std::fputs(usage, stdout); return 0;
      default: std::fputs(usage, stderr); return 2;
    }
  }
  if (wanted.task == Task::merge) {
    wanted.files.assign(argv + optind, argv + argc);
  } else if (optind != argc) {
    std::fprintf(stderr, "fleet: did not expect '%s'\n%s", argv[optind], usage);
    return 2;
  }
  if (wanted.task == Task::mpi && !threads_given) {
    wanted.threads = 1;  // the ranks share the cores already
  }
  try {
    int const result = do_task(wanted, argc, argv);
    if (std::fflush(stdout) != 0) {
      std::fprintf(stderr, "fleet: could not write to the output\n");
      return 2;
    }
    return result;
  } catch (std::exception const& error) {
    std::fprintf(stderr, "fleet: %s\n", error.what());
    return 2;
  }
}
