// Parts of a campaign as files: what is whole reads back to the bit, and what is not is named.
#include <csignal>
#include <cstddef>
#include <cstdint>
#include <cstdlib>
#include <filesystem>
#include <iterator>
#include <limits>
#include <string>
#include <vector>

#include <doctest/doctest.h>

#include <sys/resource.h>
#include <sys/wait.h>
#include <unistd.h>

#include "../../examples/policies.hpp"
#include "../../examples/cellar.hpp"
#include "wend/lab/shards.hpp"

namespace {

using namespace wend;

// A folder that is gone afterwards.
struct Folder {
  std::filesystem::path path;

  Folder() {
    // mkdtemp (POSIX.1-2008) puts its own characters in place of six of these at the end.
    std::string name = (std::filesystem::temp_directory_path() / "wend-shards-").string() + std::string(6, 'X');
    REQUIRE(::mkdtemp(name.data()) != nullptr);
    path = name;
  }
  ~Folder() { std::filesystem::remove_all(path); }
  Folder(Folder const&) = delete;
  Folder& operator=(Folder const&) = delete;

  [[nodiscard]] std::string operator/(std::string const& name) const { return (path / name).string(); }
  [[nodiscard]] std::size_t entries() const {
    return static_cast<std::size_t>(
        std::distance(std::filesystem::directory_iterator(path), std::filesystem::directory_iterator()));
  }
};

// Rows with every kind of number in them.
lab::RowFile some(std::uint64_t runs, lab::Shard shard = {}, std::uint64_t seed = 9) {
  lab::RowFile file;
  file.identity = {0xc0ffee42U, seed, runs};
  file.shard = shard;
  lab::Draws const draws(seed, 1);
  for (std::uint64_t k = 0; k < shard.size(runs); ++k) {
    lab::RunRow row;
    row.run = shard.first(runs) + k;
    auto const i = static_cast<std::uint32_t>(row.run);
    row.world = row.run % 3;
    row.ending = static_cast<lab::Ending>(row.run % 3);
    row.last_status = static_cast<Status>(row.run % 8);
    row.switches = static_cast<int>(row.run % 11);
    row.time = draws.normal({1, i});
    row.path_length = draws.uniform({2, i}) * 1e-300;
    row.straight_length = -0.0;
    row.least_clearance = row.run % 2 == 0 ? std::numeric_limits<double>::infinity() : draws.normal({3, i}) * 1e300;
    row.start = {{draws.normal({4, i}), 0.1}, {1.0, 5e-324}};
    row.goal = {1.0 / 3.0, static_cast<double>(draws.uniform({5, i}))};
    file.rows.push_back(row);
  }
  return file;
}

bool same(lab::RowFile const& a, lab::RowFile const& b) {
  return a.identity == b.identity && a.shard == b.shard && a.complete == b.complete && a.rows == b.rows;
}

bool reads(std::string const& text) {
  try {
    static_cast<void>(lab::parse_rows("x", text));
    return true;
  } catch (lab::FileError const&) {
    return false;
  }
}

std::string why(std::string const& text) {
  try {
    static_cast<void>(lab::parse_rows("x", text));
    return "";
  } catch (lab::FileError const& error) {
    return error.what();
  }
}

bool some_problem(lab::Merged const& merged, std::string const& start, std::string const& part) {
  for (std::string const& problem : merged.problems) {
    if (problem.substr(0, start.size()) == start && problem.find(part) != problem.npos) {
      return true;
    }
  }
  return false;
}

}  // namespace

TEST_CASE("shards cover all runs once, as evenly as can be") {
  for (std::uint64_t const runs : {0ULL, 1ULL, 6ULL, 7ULL, 100ULL, 0xFFFFFFFFFFFFFFFFULL}) {
    for (std::uint64_t const of : {1ULL, 2ULL, 7ULL, 64ULL}) {
      std::uint64_t next = 0;
      for (std::uint64_t i = 1; i <= of; ++i) {
        lab::Shard const shard{i, of};
        CHECK(shard.first(runs) == next);
        CHECK(shard.size(runs) >= runs / of);
        CHECK(shard.size(runs) - runs / of <= 1);
        next += shard.size(runs);
      }
      CHECK(next == runs);
    }
  }
}

TEST_CASE("rows read back to the bit") {
  for (std::uint64_t const runs : {0U, 1U, 50U}) {
    lab::RowFile const file = some(runs);
    CHECK(same(lab::parse_rows("x", lab::text_of(file)), file));
  }
  lab::RowFile stopped = some(50, {2, 3});
  stopped.complete = false;
  stopped.rows.erase(stopped.rows.begin() + 4);
  CHECK(same(lab::parse_rows("x", lab::text_of(stopped)), stopped));
}

TEST_CASE("a file that is cut off anywhere does not read as one") {
  std::string const text = lab::text_of(some(12));
  REQUIRE(reads(text));
  int read = 0;
  for (std::size_t size = 0; size < text.size(); ++size) {
    read += reads(text.substr(0, size)) ? 1 : 0;
  }
  CHECK(read == 0);
  CHECK_FALSE(reads(text + "\n"));
  CHECK_FALSE(reads(text + text));
  CHECK(why(text.substr(0, text.rfind("end"))).find("cut off") != std::string::npos);
}

TEST_CASE("a file with any bit changed does not read as one") {
  std::string const text = lab::text_of(some(6));
  int read = 0;
  for (std::size_t i = 0; i < text.size(); ++i) {
    for (unsigned bit = 0; bit < 8; ++bit) {
      std::string changed = text;
      changed[i] = static_cast<char>(static_cast<unsigned char>(changed[i]) ^ (1U << bit));
      // The checksum's own hexadecimal digits may be capitals.
      read += changed != text && reads(changed) && lab::text_of(lab::parse_rows("x", changed)) != text ? 1 : 0;
    }
  }
  CHECK(read == 0);
  // A line that is missing, or there twice, with the closing line as it was.
  std::size_t const line = text.find("\n3,") + 1;
  std::size_t const end = text.find('\n', line) + 1;
  CHECK_FALSE(reads(text.substr(0, line) + text.substr(end)));
  CHECK_FALSE(reads(text.substr(0, end) + text.substr(line, end - line) + text.substr(end)));
}

TEST_CASE("errors name line and column") {
  std::string text = lab::text_of(some(3));
  std::size_t const line = text.find("\n1,") + 1;
  text[line + 2] = 'x';
  CHECK(why(text) == "x:6:3: expected a number");
}

TEST_CASE("what is merged has the bits of one process, whatever the number of parts and their order") {
  Folder const folder;
  constexpr Loop<decltype(policies::composed)> loop{.policy = policies::composed};
  lab::Scenes const scenes{{cellar::world()},
                           [](lab::Ground const& ground, lab::Draws const& draws) {
                             return lab::drawn_trip(ground, {cellar::region, 0.4, 4.0, 60.0}, draws);
                           },
                           {}};
  constexpr std::uint64_t runs = 45;
  lab::CampaignIdentity const identity{lab::campaign_fingerprint(loop, cellar::cart(), scenes, runs, 3), 3, runs};
  auto const whole = lab::campaign(loop, cellar::cart(), scenes, runs, 3).rows;
  for (std::uint64_t const of : {1U, 4U, 7U}) {
    std::vector<std::string> names;
    for (std::uint64_t i = of; i >= 1; --i) {
      lab::Shard const shard{i, of};
      lab::CampaignOptions options;
      options.first = shard.first(runs);
      auto part = lab::campaign(loop, cellar::cart(), scenes, shard.size(runs), 3, options);
      names.push_back(folder / (std::to_string(i) + "-" + std::to_string(of)));
      lab::write_surely(names.back(), lab::text_of({identity, shard, part.complete, part.rows}));
    }
    lab::Merged const merged = lab::merge(names, identity);
    CHECK(merged.complete());
    CHECK(merged.problems.empty());
    CHECK(merged.whole.rows == whole);
  }
  // Another policy, vehicle, world, seed, number of runs, or number of discs told is another campaign.
  constexpr Loop<decltype(policies::composed)> slower{.policy = policies::composed, .pace = {.top_speed = 0.5F}};
  constexpr Loop<decltype(policies::blended)> other{.policy = policies::blended};
  lab::Vehicle late = cellar::cart();
  late.latency = 0.06;
  lab::Scenes moved = scenes;
  moved.worlds[0].discs[3].disc.radius += 1e-9;
  CHECK(lab::campaign_fingerprint(slower, cellar::cart(), scenes, runs, 3) != identity.fingerprint);
  CHECK(lab::campaign_fingerprint(other, cellar::cart(), scenes, runs, 3) != identity.fingerprint);
  CHECK(lab::campaign_fingerprint(loop, late, scenes, runs, 3) != identity.fingerprint);
  CHECK(lab::campaign_fingerprint(loop, cellar::cart(), moved, runs, 3) != identity.fingerprint);
  CHECK(lab::campaign_fingerprint<8>(loop, cellar::cart(), scenes, runs, 3) != identity.fingerprint);
  CHECK(lab::campaign_fingerprint(loop, cellar::cart(), scenes, runs, 3) == identity.fingerprint);
}

TEST_CASE("a merge names what is missing, stopped, damaged, foreign and double, and what to run again") {
  Folder const folder;
  auto const write = [&folder](std::string const& name, lab::RowFile const& file) {
    lab::write_surely(folder / name, lab::text_of(file));
    return folder / name;
  };
  lab::RowFile stopped = some(40, {2, 5});
  stopped.complete = false;
  stopped.rows.resize(3);
  std::string const first = write("first", some(40, {1, 5}));
  std::string const again = write("again", some(40, {1, 5}));
  std::string const half = write("half", stopped);
  std::string const third = write("third", some(40, {3, 5}));
  std::string const fourth = write("fourth", some(40, {4, 5}));
  std::string const other = write("other", some(40, {5, 5}, 10));
  std::string const parts = write("parts", some(40, {5, 6}));
  std::filesystem::resize_file(third, std::filesystem::file_size(third) / 2);
  lab::CampaignIdentity const identity = some(40).identity;

  lab::Merged const merged =
      lab::merge({first, again, half, third, fourth, other, parts, folder / "nothing"}, identity);
  for (std::string const& problem : merged.problems) {
    MESSAGE(problem);
  }
  CHECK_FALSE(merged.complete());
  CHECK(some_problem(merged, "double: shard 1/5", "agree"));
  CHECK(some_problem(merged, "stopped: shard 2/5", "3 of 8 runs"));
  CHECK(some_problem(merged, "damaged: ", "(shard 3/5)"));
  CHECK(some_problem(merged, "missing: shard 3/5", ""));
  CHECK(some_problem(merged, "missing: shard 5/5", ""));
  CHECK(some_problem(merged, "foreign: ", "other is of another campaign"));
  CHECK(some_problem(merged, "foreign: ", "parts is shard 5/6"));
  CHECK(some_problem(merged, "damaged: ", "nothing"));
  CHECK(merged.run_again == std::vector<lab::Shard>{{2, 5}, {3, 5}, {5, 5}});
  CHECK(merged.whole.rows.size() == 8 + 3 + 8);

  // Only those are run again, and the whole is whole.
  std::string const fifth = write("fifth", some(40, {5, 5}));
  write("third", some(40, {3, 5}));
  std::string const second = write("second", some(40, {2, 5}));
  lab::Merged const mended = lab::merge({first, half, third, fourth, fifth, second}, identity);
  CHECK(mended.complete());
  CHECK(mended.run_again.empty());
  CHECK(mended.whole.rows == some(40).rows);
  CHECK(lab::merge({second, first, third, fourth, fifth}).complete());  // without being told of which campaign

  // Two whole files of one shard that differ: nobody knows which is right.
  lab::RowFile wrong = some(40, {4, 5});
  wrong.rows[2].time += 1.0;
  lab::Merged const doubtful = lab::merge({first, second, third, fourth, fifth, write("wrong", wrong)}, identity);
  CHECK_FALSE(doubtful.complete());
  CHECK(some_problem(doubtful, "double: shard 4/5", "differ"));
  CHECK(doubtful.run_again == std::vector<lab::Shard>{{4, 5}});

  CHECK_FALSE(lab::merge({}, identity).complete());
  CHECK_FALSE(lab::merge({other}, identity).complete());
}

TEST_CASE("a full disk and a place that cannot be written are reported, and leave nothing behind") {
  Folder const folder;
  auto const refused = [](std::string const& file, std::string const& text) -> std::string {
    try {
      lab::write_surely(file, text);
      return "";
    } catch (lab::FileError const& error) {
      return error.what();
    }
  };
  CHECK(refused(folder / "no/such/folder", "x").find("could not open") != std::string::npos);
  // A child that may write files of 10 000 bytes only, as on a disk with so much room left.
  pid_t const child = ::fork();
  if (child == 0) {
    std::signal(SIGXFSZ, SIG_IGN);
    rlimit const room{10000, 10000};
    bool const told = ::setrlimit(RLIMIT_FSIZE, &room) == 0 &&
                      refused(folder / "rows", lab::text_of(some(500))).find("could not write") != std::string::npos;
    ::_exit(told ? 0 : 1);
  }
  int status = -1;
  REQUIRE(::waitpid(child, &status, 0) == child);
  CHECK(WIFEXITED(status));
  CHECK(WEXITSTATUS(status) == 0);
  CHECK(folder.entries() == 0);
}

TEST_CASE("kill -9 while files are written leaves the old one or a new one, whole") {
  Folder const folder;
  std::string const file = folder / "rows";
  std::string const old_text = lab::text_of(some(3000, {}, 1));
  std::string const new_text = lab::text_of(some(3000, {}, 2));
  int both = 0;
  for (int i = 0; i < 20; ++i) {
    lab::write_surely(file, old_text);
    pid_t const child = ::fork();
    if (child == 0) {
      while (true) {
        lab::write_surely(file, new_text);
        lab::write_surely(file, old_text);
      }
    }
    ::usleep(static_cast<useconds_t>(2000 + 700 * i));
    REQUIRE(::kill(child, SIGKILL) == 0);
    int status = 0;
    REQUIRE(::waitpid(child, &status, 0) == child);
    std::string const left = lab::read_whole(file);
    CHECK((left == old_text || left == new_text));
    both |= left == old_text ? 1 : 2;
  }
  MESSAGE("found after the kills: ", both, " (1 old ones, 2 new ones, 3 both)");
}
