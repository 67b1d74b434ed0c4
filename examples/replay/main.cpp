// replay: feeds recorded ranges through the ring and a policy, or decides again what a machine's log says that it
// decided, and prints what is decided, and why.
//
//   replay RECORD.csv [--goal X,Y] [--noise METRES] [--reach METRES] [--policy NAME] [--every N]
//                     [--dump-to FILE [--as-discs]]
//   replay --dump FILE [--noise METRES] [--reach METRES] [--policy NAME] [--every N | --brief]
//
// RECORD.csv has the columns time_s, x_m, y_m, heading_rad and range_0_m to range_<n-1>_m, for n evenly spaced beams
// all round, the first one along the nose; n is 8, 16, 36, 90, 180 or 360. An empty cell is a beam without an echo.
#include <cmath>
#include <cstdio>
#include <exception>
#include <string>
#include <vector>

#include <getopt.h>

#include <wend/lab/csv.hpp>

#include "replay.hpp"

namespace {

namespace lab = wend::lab;

constexpr char const* usage =
    "usage: replay RECORD.csv [--goal X,Y] [--noise METRES] [--reach METRES] [--policy NAME] [--every N]\n"
    "                         [--dump-to FILE [--as-discs]]\n"
    "       replay --dump FILE [--noise METRES] [--reach METRES] [--policy NAME] [--every N | --brief]\n"
    "  --goal X,Y      where to (default: the last recorded position)\n"
    "  --noise METRES  of one range, standard deviation (default: 0.015)\n"
    "  --reach METRES  of the ranger (default: 6)\n"
    "  --policy NAME   hard-switch, two-thresholds, blend or composed (default: composed; of a dump the one that "
    "fits)\n"
    "  --every N       print every Nth decision (default: 1)\n"
    "  --dump-to FILE  write the last decisions, up to 1024, as a machine's log would dump them\n"
    "  --as-discs      decide on the discs that the ranges show, and dump those instead of the ranges\n"
    "  --dump FILE     decide a dump again, compare bit by bit, and explain; exit code 1 when a decision differs\n"
    "  --brief         only tell whether they fall the same\n";

// Numbers with commas between them; empty when the text is anything else.
std::vector<double> numbers(char const* text) {
  std::vector<double> values;
  for (lab::detail::Cell const& cell : lab::detail::split(text)) {
    double value = 0.0;
    if (!lab::detail::is_number(cell.text, value)) {
      return {};
    }
    values.push_back(value);
  }
  return values;
}

bool is_policy(std::string const& name) {
  bool known = false;
  replay::for_each_policy([&](std::string const& one, auto const&) { known = known || one == name; });
  return known;
}

// Takes one option with its value; tells what was expected when that is not good.
std::string take(replay::Options& options, int given, char const* text) {
  std::vector<double> const values = numbers(text);
  bool const positive = values.size() == 1 && values[0] > 0.0;
  switch (given) {
    case 'g': options.goal = values; return values.size() == 2 ? "" : "--goal X,Y in metres";
    case 'e':
      options.every = positive && values[0] <= 1e9 ? static_cast<int>(values[0]) : 0;
      return positive && values[0] == static_cast<double>(options.every) ? "" : "--every with a whole number from 1";
    case 'n': options.noise = positive ? values[0] : 0.0; return positive ? "" : "a length in metres over 0";
    case 'r': options.reach = positive ? values[0] : 0.0; return positive ? "" : "a length in metres over 0";
    case 'p':
      options.policy = text;
      return is_policy(text) ? "" : "--policy hard-switch, two-thresholds, blend or composed";
    case 't': options.dump_to = text; return *text != '\0' ? "" : "--dump-to with a file name";
    default: options.dump = text; return *text != '\0' ? "" : "--dump with a file name";
  }
}

}  // namespace

int main(int argc, char** argv) {
  replay::Options options;
  option const known[] = {{"goal", required_argument, nullptr, 'g'},
                          {"noise", required_argument, nullptr, 'n'},
                          {"reach", required_argument, nullptr, 'r'},
                          {"every", required_argument, nullptr, 'e'},
                          {"policy", required_argument, nullptr, 'p'},
                          {"dump", required_argument, nullptr, 'd'},
                          {"dump-to", required_argument, nullptr, 't'},
                          {"as-discs", no_argument, nullptr, 'a'},
                          {"brief", no_argument, nullptr, 'b'},
                          {"help", no_argument, nullptr, 'h'},
                          {nullptr, 0, nullptr, 0}};
  for (int given = 0; (given = getopt_long(argc, argv, "", known, nullptr)) != -1;) {
    if (given == 'h') {
      std::fputs(usage, stdout);
      return 0;
    }
    if (given == '?') {
      std::fputs(usage, stderr);
      return 2;
    }
    if (given == 'a' || given == 'b') {
      (given == 'a' ? options.as_discs : options.brief) = true;
      continue;
    }
    if (std::string const expected = take(options, given, optarg); !expected.empty()) {
      std::fprintf(stderr, "replay: expected %s, found '%s'\n%s", expected.c_str(), optarg, usage);
      return 2;
    }
  }
  bool const of_dump = !options.dump.empty();
  bool const only_of_record = !options.goal.empty() || !options.dump_to.empty() || options.as_discs;
  if (optind != argc - (of_dump ? 0 : 1) || (of_dump ? only_of_record : options.brief) ||
      (options.as_discs && options.dump_to.empty())) {
    std::fputs(usage, stderr);
    return 2;
  }
  try {
    if (of_dump) {
      return replay::over_dump(options);
    }
    options.record = argv[optind];
    replay::over_record(options);
    return 0;
  } catch (std::exception const& error) {
    std::fprintf(stderr, "replay: %s\n", error.what());
    return 2;
  }
}
