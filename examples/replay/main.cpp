// replay: feeds recorded ranges through the ring and a policy, and prints what it decides on each row, and why.
//
//   replay RECORD.csv [--goal X,Y] [--noise METRES] [--reach METRES] [--every N]
//
// RECORD.csv has the columns time_s, x_m, y_m, heading_rad and range_0_m to range_<n-1>_m, for n evenly spaced beams
// all round, the first one along the nose; n is 8, 16, 36, 90, 180 or 360. An empty cell is a beam without an echo.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <cstdio>
#include <exception>
#include <numbers>
#include <span>
#include <string>
#include <vector>

#include <getopt.h>

#include <wend/lab/csv.hpp>
#include <wend/lab/modes.hpp>
#include <wend/wend.hpp>

#include "../policies.hpp"

namespace {

using namespace wend;
using policies::composed;

constexpr char const* usage =
    "usage: replay RECORD.csv [--goal X,Y] [--noise METRES] [--reach METRES] [--every N]\n"
    "  --goal X,Y      where to (default: the last recorded position)\n"
    "  --noise METRES  of one range, standard deviation (default: 0.015)\n"
    "  --reach METRES  of the ranger (default: 6)\n"
    "  --every N       print every Nth decision (default: 1)\n";

struct Options {
  std::string record;
  std::vector<double> goal;
  double noise = 0.015;
  double reach = 6.0;
  int every = 1;
};

// A clearance in metres, or that nothing is seen.
std::string metres(float clearance) {
  std::array<char, 32> text{};
  std::snprintf(text.data(), text.size(), "%.3f", static_cast<double>(clearance));
  return clearance < 0.5F * far_away ? text.data() : "-";
}

// Why the course is what it is, in words, from what the policy remembers and what it saw.
char const* reason(Course<float> const& course, memory_t<decltype(composed), float> const& memory, float nearest) {
  if (!(course.confidence > 0.0F)) {
    return "-";  // there is none: the status says why
  }
  bool const passing = lab::modes_of(memory) != 0;
  if (nearest < 0.10F) {
    return "away";
  }
  if (nearest < 0.35F) {
    return passing ? "away and past" : "away and to the goal";
  }
  return passing ? "past" : "to the goal";
}

template <int Beams>
void replay(lab::Table const& table, Options const& options) {
  std::size_t const time = table.column("time_s");
  std::size_t const x = table.column("x_m");
  std::size_t const y = table.column("y_m");
  std::size_t const heading = table.column("heading_rad");
  std::size_t const first_range = table.column("range_0_m");
  Ring<Beams> const ring{.directions = even_bearings<Beams>(0.0, 2.0 * std::numbers::pi / Beams),
                         .min_range = 0.05F,
                         .max_range = static_cast<float>(options.reach),
                         .noise = static_cast<float>(options.noise)};
  Loop<decltype(composed), Ring<Beams>> const loop{.policy = composed, .sensing = ring};
  memory_t<decltype(loop), float> memory;
  Situation<float> now;
  std::vector<double> const& last = table.rows.back();
  now.goal = options.goal.empty()
                 ? Vec2<float>(static_cast<float>(last[x]), static_cast<float>(last[y]))
                 : Vec2<float>(static_cast<float>(options.goal[0]), static_cast<float>(options.goal[1]));

  std::printf("%8s %6s %6s %10s %8s %11s %7s %9s  %-14s %s\n", "time", "echoes", "discs", "clearance", "course",
              "confidence", "speed", "turn", "status", "because");
  std::printf("%8s %6s %6s %10s %8s %11s %7s %9s\n", "s", "", "", "m", "deg", "", "m/s", "rad/s");
  int switches = 0;
  std::uint32_t modes = 0;
  float least = far_away;
  for (std::size_t row = 0; row < table.rows.size(); ++row) {
    std::vector<double> const& record = table.rows[row];
    std::array<float, static_cast<std::size_t>(Beams)> ranges;
    for (std::size_t k = 0; k < ranges.size(); ++k) {
      double const range = record[first_range + k];
      ranges[k] = std::isnan(range) ? ring.no_echo : static_cast<float>(range);
    }
    now.pose.position = {static_cast<float>(record[x]), static_cast<float>(record[y])};
    now.pose.heading = {static_cast<float>(std::cos(record[heading])), static_cast<float>(std::sin(record[heading]))};
    now.dt = row == 0 ? 0.1F : static_cast<float>(record[time] - table.rows[row - 1][time]);
    DiscSet<float, 16> discs;
    RingCount const count = ring.discs(std::span<float const, ranges.size()>(ranges), discs);
    float const nearest = look(Pose<float>{}, Vec2<float>(1.0F, 0.0F), discs, loop.robot_radius, now.dt).clearance;
    Command<float> const command = loop.tick(now, std::span<float const, ranges.size()>(ranges), memory);
    std::uint32_t const modes_now = lab::modes_of(memory.policy);
    switches += row > 0 && modes_now != modes ? 1 : 0;
    modes = modes_now;
    least = std::min(least, nearest);
    if (row % static_cast<std::size_t>(options.every) != 0) {
      continue;
    }
    // The course is in the robot's own frame: 0 degrees is straight on, to the left is positive.
    double const course = std::atan2(static_cast<double>(command.course.direction.y()),
                                     static_cast<double>(command.course.direction.x()));
    std::printf("%8.3f %6d %6d %10s %8.1f %11.3f %7.3f %9.3f  %-14s %s\n", record[time], count.echoes, discs.size(),
                metres(nearest).c_str(), course * 180.0 / std::numbers::pi,
                static_cast<double>(command.course.confidence), static_cast<double>(command.body.speed),
                static_cast<double>(command.body.turn_rate), text(status_of(command)),
                reason(command.course, memory.policy, nearest));
  }
  std::printf("\n%zu rows, %d switches, least clearance seen %s m\n", table.rows.size(), switches,
              metres(least).c_str());
  std::printf(
      "What a recording would have led to is no proof of what a machine will do, and wend is no safety function.\n");
}

void replay(Options const& options) {
  lab::Table const table = lab::parse_table(options.record, lab::read_whole(options.record),
                                            [](std::string const& name) { return name.rfind("range_", 0) == 0; });
  std::size_t const first_range = table.column("range_0_m");
  std::size_t const beams = table.names.size() - first_range;
  for (std::size_t k = 0; k < beams; ++k) {
    std::string const name = "range_" + std::to_string(k) + "_m";
    if (table.names[first_range + k] != name) {
      throw lab::FileError(options.record, table.names_line, 1,
                           "expected the column '" + name + "' after '" + table.names[first_range + k - 1] +
                               "', found '" + table.names[first_range + k] + "'");
    }
  }
  if (table.rows.empty()) {
    throw lab::FileError(options.record, table.names_line + 1, 1, "expected at least one row of readings, found none");
  }
  switch (beams) {
    case 8: return replay<8>(table, options);
    case 16: return replay<16>(table, options);
    case 36: return replay<36>(table, options);
    case 90: return replay<90>(table, options);
    case 180: return replay<180>(table, options);
    case 360: return replay<360>(table, options);
    default:
      throw lab::FileError(options.record, table.names_line, 1,
                           "expected 8, 16, 36, 90, 180 or 360 range columns, found " + std::to_string(beams));
  }
}

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

}  // namespace

int main(int argc, char** argv) {
  Options options;
  option const known[] = {{"goal", required_argument, nullptr, 'g'},  {"noise", required_argument, nullptr, 'n'},
                          {"reach", required_argument, nullptr, 'r'}, {"every", required_argument, nullptr, 'e'},
                          {"help", no_argument, nullptr, 'h'},        {nullptr, 0, nullptr, 0}};
  for (int given = 0; (given = getopt_long(argc, argv, "", known, nullptr)) != -1;) {
    if (given == 'h') {
      std::fputs(usage, stdout);
      return 0;
    }
    if (given == '?') {
      std::fputs(usage, stderr);
      return 2;
    }
    std::vector<double> const values = numbers(optarg);
    bool const pair = given == 'g' && values.size() == 2;
    bool const positive = given != 'g' && values.size() == 1 && values[0] > 0.0 &&
                          (given != 'e' || (values[0] <= 1e9 && values[0] == std::floor(values[0])));
    if (!pair && !positive) {
      std::fprintf(stderr, "replay: expected %s, found '%s'\n%s",
                   given == 'g'   ? "--goal X,Y in metres"
                   : given == 'e' ? "--every with a whole number from 1"
                                  : "a length in metres over 0",
                   optarg, usage);
      return 2;
    }
    switch (given) {
      case 'g': options.goal = values; break;
      case 'n': options.noise = values[0]; break;
      case 'r': options.reach = values[0]; break;
      default: options.every = static_cast<int>(values[0]); break;
    }
  }
  if (optind != argc - 1) {
    std::fputs(usage, stderr);
    return 2;
  }
  options.record = argv[optind];
  try {
    replay(options);
    return 0;
  } catch (std::exception const& error) {
    std::fprintf(stderr, "replay: %s\n", error.what());
    return 2;
  }
}
