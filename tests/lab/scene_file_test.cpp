// Scene files: what is written is what is had in code, what is read is written back to the bit, and what is wrong is
// told with its place (file:line:column from 1, as compilers do; common practice, no source). Numbers are checked
// against the C library's strtod and strtof, headings against values of sine and cosine that geometry gives.
#include <bit>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <cstdio>
#include <cstdlib>
#include <ctime>
#include <limits>
#include <numbers>
#include <optional>
#include <stdexcept>
#include <string>
#include <string_view>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/csv.hpp"
#include "wend/lab/ground.hpp"
#include "wend/lab/random.hpp"
#include "wend/lab/scene_file.hpp"

namespace {

using namespace wend;
using lab::FileError;
using lab::parse_scene;
using lab::scene_text;
using lab::SceneFile;

SceneFile parse(std::string_view content) { return parse_scene("hall.scene", content); }

std::string error_in(std::string_view content) {
  try {
    static_cast<void>(parse(content));
    return "";
  } catch (FileError const& error) {
    return error.what();
  }
}

// The error of one line in a scene that is right without it: always line 4.
std::string error_of_line(std::string const& line) {
  return error_in("wend scene 1\nstart 0 0\ngoal 9 0\n" + line + "\n");
}

template <typename T>
bool same_bits(T a, T b) {
  if constexpr (sizeof(T) == sizeof(std::uint32_t)) {
    return std::bit_cast<std::uint32_t>(a) == std::bit_cast<std::uint32_t>(b);
  } else {
    return std::bit_cast<std::uint64_t>(a) == std::bit_cast<std::uint64_t>(b);
  }
}
bool same_bits(Vec2<double> const& a, Vec2<double> const& b) {
  return same_bits(a.x(), b.x()) && same_bits(a.y(), b.y());
}
bool same_bits(std::optional<double> const& a, std::optional<double> const& b) {
  return a.has_value() == b.has_value() && same_bits(a.value_or(0.0), b.value_or(0.0));
}

// The members of a machine that files can say, by the names that their users know.
struct VehicleMember {
  char const* name;
  double lab::Vehicle::* member;
};
constexpr VehicleMember vehicle_members[] = {{"radius", &lab::Vehicle::radius},
                                             {"acceleration", &lab::Vehicle::acceleration},
                                             {"latency", &lab::Vehicle::latency},
                                             {"watchdog", &lab::Vehicle::watchdog},
                                             {"period", &lab::Vehicle::period},
                                             {"jitter", &lab::Vehicle::jitter},
                                             {"range_noise", &lab::Vehicle::range_noise},
                                             {"sight", &lab::Vehicle::sight},
                                             {"dropout", &lab::Vehicle::dropout},
                                             {"position_noise", &lab::Vehicle::position_noise},
                                             {"heading_noise", &lab::Vehicle::heading_noise},
                                             {"disc_noise", &lab::Vehicle::disc_noise},
                                             {"radius_noise", &lab::Vehicle::radius_noise},
                                             {"disc_dropout", &lab::Vehicle::disc_dropout},
                                             {"slip", &lab::Vehicle::slip},
                                             {"wheel_spread", &lab::Vehicle::wheel_spread},
                                             {"track_spread", &lab::Vehicle::track_spread}};
struct DriveMember {
  char const* name;
  Parameter DifferentialDrive::* member;
};
constexpr DriveMember drive_members[] = {{"wheel_radius", &DifferentialDrive::wheel_radius},
                                         {"track", &DifferentialDrive::track},
                                         {"max_rate", &DifferentialDrive::max_rate}};
struct Claim {
  char const* name;
  std::optional<double> lab::Claims::* member;
};
constexpr Claim claims[] = {{"keeps_clear", &lab::Claims::keeps_clear},
                            {"seen_within", &lab::Claims::seen_within},
                            {"arrives", &lab::Claims::arrives},
                            {"contacts", &lab::Claims::contacts}};

void check_same(SceneFile const& a, SceneFile const& b) {
  CHECK(a.title == b.title);
  REQUIRE(a.world.discs.size() == b.world.discs.size());
  for (std::size_t i = 0; i < a.world.discs.size(); ++i) {
    lab::WorldDisc const& d = a.world.discs[i];
    lab::WorldDisc const& e = b.world.discs[i];
    CHECK(same_bits(d.disc.centre, e.disc.centre));
    CHECK(same_bits(d.disc.radius, e.disc.radius));
    CHECK(same_bits(d.velocity, e.velocity));
  }
  CHECK(same_bits(a.trip.start.position, b.trip.start.position));
  CHECK(same_bits(a.trip.start.heading, b.trip.start.heading));
  CHECK(same_bits(a.trip.goal, b.trip.goal));
  CHECK(same_bits(a.trip.time_limit, b.trip.time_limit));
  CHECK(same_bits(a.region.low, b.region.low));
  CHECK(same_bits(a.region.high, b.region.high));
  CHECK(same_bits(a.clear, b.clear));
  CHECK(same_bits(a.least_way, b.least_way));
  for (auto const& m : vehicle_members) {
    CAPTURE(m.name);
    CHECK(same_bits(a.vehicle.*m.member, b.vehicle.*m.member));
  }
  for (auto const& m : drive_members) {
    CAPTURE(m.name);
    CHECK(same_bits(a.vehicle.drive.*m.member, b.vehicle.drive.*m.member));
  }
  for (auto const& m : claims) {
    CAPTURE(m.name);
    CHECK(same_bits(a.claims.*m.member, b.claims.*m.member));
  }
}

// A scene of which every number is drawn, of all sizes that there are.
SceneFile drawn_scene(std::uint64_t number) {
  lab::Draws const draws(11, number);
  std::uint32_t drawn = 0;
  auto const share = [&] { return draws.uniform({1, drawn++}); };
  auto const size = [&] { return std::pow(10.0, draws.between(-9.0, 2.5, {2, drawn++})); };
  auto const place = [&] { return (share() < 0.5 ? -1.0 : 1.0) * size(); };
  SceneFile scene;
  scene.title = number % 3 == 0 ? "" : "Hall " + std::to_string(number) + " # of \xC3\xA9t\xC3\xA9";
  scene.vehicle.radius = 0.1 * share();
  for (auto const& m : vehicle_members) {
    bool const is_share = scene.vehicle.*m.member < 0.02;  // by its default: an error, of one kind or another
    scene.vehicle.*m.member = is_share ? 0.9 * share() : 0.001 + share();
  }
  for (auto const& m : drive_members) {
    scene.vehicle.drive.*m.member = static_cast<float>(0.01 + size());
  }
  for (auto const& m : claims) {
    if (share() < 0.7) {
      scene.claims.*m.member = share();
    }
  }
  scene.trip.start.position = {place(), 5000.0 + place()};
  double const angle = std::numbers::pi * (2.0 * share() - 1.0);
  scene.trip.start.heading = {std::cos(angle), std::sin(angle)};
  scene.trip.goal = {place(), 9000.0 + place()};
  scene.trip.time_limit = size();
  scene.clear = size();
  scene.least_way = size();
  for (int i = 0; i < 40; ++i) {
    scene.world.add(place(), place(), size(),
                    i % 3 == 0 ? Vec2<double>{place(), place()} : Vec2<double>{i % 2 == 0 ? 0.0 : -0.0, 0.0});
  }
  scene.region = lab::region_around(scene.world, scene.trip, 0.1 + share());
  return scene;
}

constexpr char const* hall =
    "# A hall.\n"
    "wend scene 1   # the format, and its version\n"
    "\n"
    "goal 11.5 4    # lines come in any order\n"
    "title  The hall, row #2 \t\n"
    "disc 2.6 1.2 0.35\n"
    "\tmoving_disc 4 -3.5e0 .25   0.5 -1\n"
    "disc\t6 5 1\t# tabs are blanks too\n"
    "start 0.6 4\n"
    "heading 180\n"
    "time_limit 90\n"
    "region -1 -5 13 9\n"
    "draw clear 0.4\n"
    "draw least_way 6\n"
    "vehicle jitter 0.1\n"
    "vehicle heading_noise 0.01\n"
    "drive track 0.42#close\n"
    "claim arrives 0.95\n"
    "claim keeps_clear 0";

}  // namespace

TEST_CASE("a scene that is written by hand is the one that is made in code") {
  SceneFile made;
  made.title = "The hall, row #2";
  made.world.add(2.6, 1.2, 0.35);
  made.world.add(4.0, -3.5, 0.25, {0.5, -1.0});
  made.world.add(6.0, 5.0, 1.0);
  made.trip = {{{0.6, 4.0}, {-1.0, 0.0}}, {11.5, 4.0}, 90.0};
  made.region = {{-1.0, -5.0}, {13.0, 9.0}};
  made.clear = 0.4;
  made.least_way = 6.0;
  made.vehicle.jitter = 0.1;
  made.vehicle.heading_noise = 0.01;
  made.vehicle.drive.track = 0.42F;
  made.claims.arrives = 0.95;
  made.claims.keeps_clear = 0.0;
  check_same(parse(hall), made);
  lab::TripBounds const bounds = parse(hall).draws();
  CHECK(bounds.region.low == made.region.low);
  CHECK(bounds.region.high == made.region.high);
  CHECK(bounds.clear == 0.4);
  CHECK(bounds.least_way == 6.0);
  CHECK(bounds.time_limit == 90.0);
}

TEST_CASE("lines that end in CR LF and a byte order mark change nothing") {
  std::string windows = "\xEF\xBB\xBF";
  for (char const* c = hall; *c != '\0'; ++c) {
    windows += *c == '\n' ? "\r\n" : std::string(1, *c);
  }
  check_same(parse(windows), parse(hall));
  check_same(parse(windows + "\r\n"), parse(hall));
}

TEST_CASE("what a file leaves out is as the structs have it, and the region 1 m around all there is") {
  SceneFile made;
  made.world.add(2.0, -3.0, 0.5);
  made.world.add(1.0, 1.0, 0.25, {1.0, 1.0});
  made.trip.start.position = {-4.0, 0.0};
  made.trip.goal = {0.0, 8.0};
  made.region = {{-5.0, -4.5}, {3.5, 9.0}};  // by hand: -4 - 1, -3 - 0.5 - 1, 2 + 0.5 + 1, 8 + 1
  check_same(parse("wend scene 1\nstart -4 0\ngoal 0 8\ndisc 2 -3 0.5\nmoving_disc 1 1 0.25 1 1\n"), made);
  made.world.discs.clear();
  made.region = {{-5.0, -1.0}, {1.0, 9.0}};
  check_same(parse("wend scene 1\nstart -4 0\ngoal 0 8\n"), made);
}

TEST_CASE("each setting goes to the member of its name and to no other") {
  std::string const before = "wend scene 1\nstart 0 0\ngoal 9 0\n";
  for (auto const& m : vehicle_members) {
    CAPTURE(m.name);
    SceneFile expected = parse(before);
    expected.vehicle.*m.member = 0.625;
    check_same(parse(before + "vehicle " + m.name + " 0.625\n"), expected);
  }
  for (auto const& m : drive_members) {
    CAPTURE(m.name);
    SceneFile expected = parse(before);
    expected.vehicle.drive.*m.member = 0.625F;
    check_same(parse(before + "drive " + m.name + " 0.625\n"), expected);
  }
  for (auto const& m : claims) {
    CAPTURE(m.name);
    SceneFile expected = parse(before);
    expected.claims.*m.member = 0.625;
    check_same(parse(before + "claim " + m.name + " 0.625\n"), expected);
  }
}

TEST_CASE("scenes of any numbers are read back to the bit") {
  for (std::uint64_t i = 0; i < 100; ++i) {
    CAPTURE(i);
    SceneFile const scene = drawn_scene(i);
    std::string const text = scene_text(scene);
    SceneFile const again = parse(text);
    check_same(again, scene);
    CHECK(scene_text(again) == text);
  }
  SceneFile const odd = parse(
      "wend scene 1\nstart -0 4.9406564584124654e-324\ngoal 1e6 -0\nheading 1 -0\nmoving_disc 3 3 1 -0 0\n"
      "disc 9 9 4.9e-324\nvehicle slip 2.2250738585072014e-308\ndrive max_rate 0.3333333432674407958984375\n");
  CHECK(std::signbit(odd.trip.start.position.x()));
  CHECK(std::signbit(odd.trip.start.heading.y()));
  CHECK(std::signbit(odd.world.discs[0].velocity.x()));
  CHECK(odd.world.discs[1].disc.radius == std::numeric_limits<double>::denorm_min());
  check_same(parse(scene_text(odd)), odd);
}

TEST_CASE("numbers are those of the C library, rounded once") {
  lab::Draws const draws(5, 0);
  for (std::uint32_t i = 0; i < 3000; ++i) {
    // Up to 21 digits, a point somewhere, and an exponent: more than either precision holds.
    std::string digits;
    for (std::uint32_t k = 0; k < 1 + i % 21; ++k) {
      digits += static_cast<char>('0' + static_cast<int>(10.0 * draws.uniform({1, i, k})));
    }
    digits.insert(digits.size() * (i % 5) / 5, digits.size() > 1 ? "." : "");
    std::string const text = digits + "e-" + std::to_string(digits.size() + i % 7);
    CAPTURE(text);
    SceneFile const scene =
        parse("wend scene 1\nstart 0 -3\ngoal 9 -3\nheading -" + text + "\ndraw clear " + text + "\n");
    CHECK(same_bits(scene.clear, std::strtod(text.c_str(), nullptr)));
    std::string const large = "1" + text;
    float const rounded = std::strtof(large.c_str(), nullptr);
    if (rounded >= 0.001F && rounded <= 1000.0F) {
      CHECK(same_bits(parse("wend scene 1\nstart 0 -3\ngoal 9 -3\ndrive track " + large + "\n").vehicle.drive.track,
                      rounded));
    }
  }
  // Between two floats lie 2^29 doubles: this one rounds to the middle of 1 and its successor, and from there down to
  // 1, where the decimal itself is nearer to the successor, 1 + 2^-23 (IEEE 754-2008, 5.12.2, from memory:
  // rounded once).
  CHECK(parse("wend scene 1\nstart 0 0\ngoal 9 0\ndrive track 1.00000005960464477539062501\n").vehicle.drive.track ==
        1.0F + std::numeric_limits<float>::epsilon());
}

TEST_CASE("headings in degrees are unit vectors, quarter turns to the bit") {
  auto const heading = [](std::string const& said) {
    return parse("wend scene 1\nstart 0 0\ngoal 9 0\nheading " + said + "\n").trip.start.heading;
  };
  struct Quarter {
    char const* degrees;
    Vec2<double> heading;
  };
  for (Quarter const& q :
       {Quarter{"0", {1.0, 0.0}}, Quarter{"-0", {1.0, 0.0}}, Quarter{"90", {0.0, 1.0}}, Quarter{"180", {-1.0, 0.0}},
        Quarter{"270", {0.0, -1.0}}, Quarter{"360", {1.0, 0.0}}, Quarter{"-90", {0.0, -1.0}},
        Quarter{"-180", {-1.0, 0.0}}, Quarter{"-270", {0.0, 1.0}}, Quarter{"-360", {1.0, 0.0}}}) {
    CAPTURE(q.degrees);
    CHECK(same_bits(heading(q.degrees), q.heading));
  }
  // The half of an equilateral triangle, the half of a square.
  double const root3 = std::sqrt(3.0);
  CHECK((heading("30") - Vec2<double>{root3 / 2.0, 0.5}).norm() < 3e-16);
  CHECK((heading("120") - Vec2<double>{-0.5, root3 / 2.0}).norm() < 3e-16);
  CHECK((heading("225") - Vec2<double>{-std::sqrt(0.5), -std::sqrt(0.5)}).norm() < 3e-16);
  CHECK((heading("-60") - Vec2<double>{0.5, -root3 / 2.0}).norm() < 3e-16);
  for (int degrees = -360; degrees <= 360; ++degrees) {
    double const angle = degrees * std::numbers::pi / 180.0;
    CHECK((heading(std::to_string(degrees)) - Vec2<double>{std::cos(angle), std::sin(angle)}).norm() < 2e-15);
  }
  // Vectors: 3, 4 and 5 make a right angle; a unit vector stays as it is.
  CHECK((heading("3 -4") - Vec2<double>{0.6, -0.8}).norm() < 3e-16);
  CHECK((heading("-1e6 0") - Vec2<double>{-1.0, 0.0}).norm() == 0.0);
  CHECK(heading("0.6000000000001 -0.8") == Vec2<double>{0.6000000000001, -0.8});
  CHECK(std::abs(heading("0.600000001 -0.8").norm() - 1.0) < 3e-16);
}

TEST_CASE("a heading that was given in degrees is written in degrees") {
  for (std::string const degrees : {"0", "90", "-45", "30", "12.5", "123.456", "0.1", "-179.9"}) {
    std::string const text = scene_text(parse("wend scene 1\nstart 0 0\ngoal 9 0\nheading " + degrees + "\n"));
    CAPTURE(text);
    CHECK(text.find("\nheading " + degrees + "\n") != text.npos);
  }
}

TEST_CASE("a file that is no scene, or one of another version, is told so at once") {
  CHECK(error_in("") == "hall.scene:1:1: expected 'wend scene 1', found the end");
  CHECK(error_in("\xEF\xBB\xBF") == "hall.scene:1:1: expected 'wend scene 1', found the end");
  CHECK(error_in("# only\n\n  # words\n") == "hall.scene:4:1: expected 'wend scene 1', found the end");
  CHECK(error_in("\nx,y,diameter\n1,2,3\n") == "hall.scene:2:1: expected 'wend scene 1', found 'x,y,diameter'");
  CHECK(error_in("wend rows 1\n") == "hall.scene:1:6: expected 'wend scene 1', found 'rows'");
  CHECK(error_in("wend scene 2\n") == "hall.scene:1:12: expected 'wend scene 1', found '2'");
  CHECK(error_in("wend scene\n") == "hall.scene:1:11: expected 'wend scene 1', found nothing");
  CHECK(error_in("wend scene 1 or so\n") == "hall.scene:1:14: expected the end of the line, found 'or'");
}

TEST_CASE("a missing start or goal is told at the end") {
  CHECK(error_in("wend scene 1\ngoal 1 2\n") == "hall.scene:3:1: expected a line 'start X Y', found the end");
  CHECK(error_in("wend scene 1\nstart 1 2") == "hall.scene:3:1: expected a line 'goal X Y', found the end");
}

TEST_CASE("an unknown word is told with those that are known") {
  CHECK(error_of_line("  disk 1 2 3") ==
        "hall.scene:4:3: expected title, disc, moving_disc, start, heading, goal, time_limit, region, draw, vehicle, "
        "drive or claim, found 'disk'");
  CHECK(error_of_line("Disc 1 2 3").find("found 'Disc'") != std::string::npos);
  CHECK(error_of_line("wend scene 1").find("found 'wend'") != std::string::npos);
  CHECK(error_of_line("drive radius 0.1") ==
        "hall.scene:4:7: expected one of wheel_radius, track, max_rate, found 'radius'");
  CHECK(error_of_line("draw clear_of 0.1") == "hall.scene:4:6: expected one of clear, least_way, found 'clear_of'");
  CHECK(error_of_line("claim safe 1") ==
        "hall.scene:4:7: expected one of keeps_clear, seen_within, arrives, contacts, found 'safe'");
  CHECK(error_of_line("vehicle mass 3") ==
        "hall.scene:4:9: expected one of radius, acceleration, latency, watchdog, period, jitter, range_noise, sight, "
        "dropout, position_noise, heading_noise, disc_noise, radius_noise, disc_dropout, slip, wheel_spread, "
        "track_spread, found 'mass'");
  CHECK(error_of_line("claim").find("hall.scene:4:6: expected 'claim NAME NUMBER', found nothing") == 0);
  // What is found is told in up to 40 bytes, and no character (two bytes each, here) is cut in two.
  std::string const long_word = "x" + [] {
    std::string word;
    for (int i = 0; i < 100; ++i) {
      word += "\xC3\xA9";
    }
    return word;
  }();
  std::string const told = error_of_line(long_word);
  CHECK(told.substr(told.find("found")) == "found '" + long_word.substr(0, 39) + "...'");
}

TEST_CASE("too few and too many numbers are told: behind the last one, and at the first one too many") {
  CHECK(error_of_line("disc 1 2") == "hall.scene:4:9: expected 'disc X Y RADIUS', found 2 behind 'disc'");
  CHECK(error_of_line("disc 1 2  # 3") == "hall.scene:4:9: expected 'disc X Y RADIUS', found 2 behind 'disc'");
  CHECK(error_of_line("disc") == "hall.scene:4:5: expected 'disc X Y RADIUS', found 0 behind 'disc'");
  CHECK(error_of_line("disc 1 2 3 4 5") == "hall.scene:4:12: expected 'disc X Y RADIUS', found 5 behind 'disc'");
  CHECK(error_of_line("moving_disc 1 2 3 4") ==
        "hall.scene:4:20: expected 'moving_disc X Y RADIUS VX VY', found 4 behind 'moving_disc'");
  CHECK(error_of_line("time_limit 5 6") ==
        "hall.scene:4:14: expected 'time_limit SECONDS', found 2 behind 'time_limit'");
  CHECK(error_of_line("region 1 2 3") ==
        "hall.scene:4:13: expected 'region LOW_X LOW_Y HIGH_X HIGH_Y', found 3 behind 'region'");
  CHECK(error_of_line("heading") ==
        "hall.scene:4:8: expected 'heading DEGREES' or 'heading DX DY', found 0 behind 'heading'");
  CHECK(error_of_line("heading 1 2 3") ==
        "hall.scene:4:13: expected 'heading DEGREES' or 'heading DX DY', found 3 behind 'heading'");
  CHECK(error_of_line("vehicle radius") == "hall.scene:4:15: expected 'vehicle NAME NUMBER', found 1 behind 'vehicle'");
  CHECK(error_of_line("drive track 0.3 m") == "hall.scene:4:17: expected 'drive NAME NUMBER', found 3 behind 'drive'");
  CHECK(error_in("wend scene 1\nstart 1 2 90\ngoal 3 4\n") ==
        "hall.scene:2:11: expected 'start X Y', found 3 behind 'start'");
  CHECK(error_in("wend scene 1\nstart 1 2\ngoal 3\n") == "hall.scene:3:7: expected 'goal X Y', found 1 behind 'goal'");
  CHECK(error_of_line("title") == "hall.scene:4:1: expected 'title TEXT', found no text");
  CHECK(error_of_line("title \t ") == "hall.scene:4:1: expected 'title TEXT', found no text");
  CHECK(error_of_line("title# none") == "hall.scene:4:1: expected 'title TEXT', found no text");
}

TEST_CASE("what is no finite number is refused, at its first character") {
  for (std::string const bad :
       {"oak",  "nan", "NaN",   "nan(1)", "inf", "-inf", "infinity", "1e999", "-1e999", "1e-999", "0x1p3",
        "1.5m", "1,5", "1.2.3", "--1",    "+1",  "1e",   "-",        ".",     "e5",     "\"1\""}) {
    CAPTURE(bad);
    CHECK(error_of_line("disc 1  " + bad + " 3") == "hall.scene:4:9: expected a number for Y, found '" + bad + "'");
    CHECK(error_of_line("vehicle period " + bad) ==
          "hall.scene:4:16: expected a number for vehicle period, found '" + bad + "'");
    CHECK(error_of_line("drive track " + bad) ==
          "hall.scene:4:13: expected a number for drive track, found '" + bad + "'");
    CHECK(error_of_line("heading " + bad) == "hall.scene:4:9: expected a number for DEGREES, found '" + bad + "'");
    CHECK(error_of_line("heading 1 " + bad) == "hall.scene:4:11: expected a number for DY, found '" + bad + "'");
  }
}

TEST_CASE("a number out of range is told with the range") {
  CHECK(error_of_line("disc 1 2 0") == "hall.scene:4:10: expected RADIUS over 0 to 1000000 metres, found '0'");
  CHECK(error_of_line("disc 1 2 -0.5") == "hall.scene:4:10: expected RADIUS over 0 to 1000000 metres, found '-0.5'");
  CHECK(error_of_line("moving_disc 5 5 1 2 -1001") ==
        "hall.scene:4:21: expected VY from -1000 to 1000 metres a second, found '-1001'");
  CHECK(error_of_line("disc 1e7 2 1") == "hall.scene:4:6: expected X from -1000000 to 1000000 metres, found '1e7'");
  CHECK(error_of_line("heading 361") == "hall.scene:4:9: expected DEGREES from -360 to 360 degrees, found '361'");
  CHECK(error_of_line("heading 0 1e-7") == "hall.scene:4:9: expected a heading of some length, found '0'");
  CHECK(error_of_line("time_limit 0") == "hall.scene:4:12: expected SECONDS over 0 to 1000000000 seconds, found '0'");
  CHECK(error_of_line("region 1 2 1 3") == "hall.scene:4:12: expected HIGH_X over LOW_X, found '1'");
  CHECK(error_of_line("region 1 2 3 -3") == "hall.scene:4:14: expected HIGH_Y over LOW_Y, found '-3'");
  CHECK(error_of_line("claim arrives 1.01") == "hall.scene:4:15: expected claim arrives from 0 to 1, found '1.01'");
  CHECK(error_of_line("vehicle period 0") ==
        "hall.scene:4:16: expected vehicle period from 0.0001 to 1000 seconds, found '0'");
  CHECK(error_of_line("vehicle radius 0") ==
        "hall.scene:4:16: expected vehicle radius over 0 to 1000000 metres, found '0'");
  for (auto const& m : vehicle_members) {
    CAPTURE(m.name);
    CHECK(error_of_line(std::string("vehicle ") + m.name + " -0.01").find(std::string("expected vehicle ") + m.name) !=
          std::string::npos);
    CHECK(error_of_line(std::string("vehicle ") + m.name + " 1.1e9").find(std::string("expected vehicle ") + m.name) !=
          std::string::npos);
  }
  for (auto const& m : drive_members) {
    CAPTURE(m.name);
    CHECK(error_of_line(std::string("drive ") + m.name + " 0").find(std::string("expected drive ") + m.name) !=
          std::string::npos);
  }
  for (std::string const share : {"claim arrives", "claim contacts", "vehicle dropout", "vehicle disc_dropout",
                                  "vehicle slip", "vehicle jitter", "vehicle wheel_spread", "vehicle track_spread"}) {
    CAPTURE(share);
    CHECK(error_of_line(share + " 0").empty());
    CHECK(error_of_line(share + " 0.99").empty());
    CHECK(error_of_line(share + " -1e-9").find("expected " + share + " from 0 to ") != std::string::npos);
    CHECK(error_of_line(share + " 1.000001").find("expected " + share + " from 0 to ") != std::string::npos);
  }
}

TEST_CASE("what may be said once is refused the second time") {
  CHECK(error_of_line(" start 1 2") == "hall.scene:4:2: expected 'start' once, found it on line 2 too");
  CHECK(error_of_line("goal 1 2") == "hall.scene:4:1: expected 'goal' once, found it on line 3 too");
  for (std::string const line : {"title a", "heading 0", "heading 0 1", "time_limit 5", "region 0 0 1 1",
                                 "draw clear 1", "vehicle slip 0", "drive track 1", "claim arrives 1"}) {
    CAPTURE(line);
    CHECK(error_of_line(line).empty());
    std::size_t const blank = line.find(' ');
    bool const is_setting = line[0] == 'd' || line[0] == 'v' || line[0] == 'c';
    std::string const word = line.substr(0, is_setting ? line.find(' ', blank + 1) : blank);
    CHECK(error_of_line(line + "\n#\n" + line) ==
          "hall.scene:6:1: expected '" + word + "' once, found it on line 4 too");
  }
}

TEST_CASE("a start where the body touches a disc and a goal within a disc at rest are refused") {
  std::string const ends = "wend scene 1\ngoal 9 0\nstart 0 0\n";
  CHECK(error_in(ends + "disc 5 5 1\ndisc 0.6 0 0.4\n") ==
        "hall.scene:3:1: expected a start where the whole body is clear of all discs, found it at the disc of line 5");
  CHECK(error_in(ends + "disc 0.6 0 0.39\n").empty());  // 0.21 m: the body has 0.20
  CHECK(error_in(ends + "vehicle radius 0.25\ndisc 0.5 0 0.25\n").find("hall.scene:3:1: expected a start") == 0);
  CHECK(error_in(ends + "moving_disc 0.1 0 0.2 5 5\n").find("hall.scene:3:1: expected a start") == 0);
  CHECK(error_in(ends + "vehicle radius 0.3\ndisc 0.6 0 0.35\n").find("hall.scene:3:1: expected a start") == 0);
  CHECK(error_in("wend scene 1\ngoal 9 0\n  start 0 0\ndisc 0 0 1\n").find("hall.scene:3:3: expected a start") == 0);
  CHECK(error_in(ends + "disc 9 1 1.5\n") ==
        "hall.scene:2:1: expected a goal clear of all discs at rest, found it in the disc of line 4");
  CHECK(error_in(ends + "disc 9 1 1\n").find("hall.scene:2:1: expected a goal") == 0);  // on its edge
  CHECK(error_in(ends + "disc 9 1 0.99\n").empty());
  CHECK(error_in(ends + "moving_disc 9 1 1.5 0.1 0\n").empty());  // it will have gone
}

TEST_CASE("an over-long line, a control character and a title that is no text are refused") {
  std::string const full(1000, '#');
  CHECK(error_of_line(full).empty());
  CHECK(error_of_line(full + "\r").empty());
  CHECK(error_of_line(full + "#") == "hall.scene:4:1001: expected a line of at most 1000 bytes, found 1001");
  CHECK(error_of_line("\xC3\xA9" + full) == "hall.scene:4:1000: expected a line of at most 1000 bytes, found 1002");
  CHECK(error_of_line(std::string("disc 1 2 \0 3", 12)) == "hall.scene:4:10: expected text, found a byte of value 0");
  CHECK(error_of_line(std::string("# a\0", 4)) == "hall.scene:4:4: expected text, found a byte of value 0");
  CHECK(error_of_line("title a\x1B[1m") == "hall.scene:4:8: expected text, found a byte of value 27");
  CHECK(error_of_line("disc 1 2 3\r\r") == "hall.scene:4:11: expected text, found a byte of value 13");
  CHECK(error_of_line("title \x7F") == "hall.scene:4:7: expected text, found a byte of value 127");
  // Columns count characters (RFC 3629: a letter of two bytes, a sign of three).
  CHECK(error_of_line("disc \xC3\xA9\xE2\x82\xAC 2 x").find("hall.scene:4:6: expected a number for X") == 0);
  CHECK(error_of_line("disc 1 \xE2\x82\xAC 3").find("hall.scene:4:8: expected a number for Y") == 0);
  CHECK(error_of_line("title \xE2\x82\xAC \x01").find("hall.scene:4:9: expected text") == 0);
}

// RFC 3629 (UTF-8), section 4 for the forms and section 10 for the overlong ones that were used for attacks; the edges
// of each form from the table in section 3.
TEST_CASE("a title is UTF-8 of the one form there is") {
  for (std::string const good : {"plain", "\xC2\x80", "\xDF\xBF", "\xE0\xA0\x80", "\xED\x9F\xBF", "\xEE\x80\x80",
                                 "\xEF\xBF\xBF", "\xF0\x90\x80\x80", "\xF4\x8F\xBF\xBF"}) {
    CAPTURE(good);
    CHECK(error_of_line("title " + good + " a").empty());
  }
  for (std::string const bad :
       {"\x80", "\xBF", "\xC0\x80", "\xC1\xBF", "\xC2", "\xC2\xC2", "\xE0\x9F\xBF", "\xE2\x82", "\xED\xA0\x80",
        "\xF0\x8F\xBF\xBF", "\xF4\x90\x80\x80", "\xF5\x80\x80\x80", "\xFF", "\xFE", "caf\xE9"}) {
    CAPTURE(bad);
    CHECK(error_of_line("title " + bad) == "hall.scene:4:1: expected a title in UTF-8");
    CHECK(error_of_line("title " + bad + " a") == "hall.scene:4:1: expected a title in UTF-8");
    CHECK(error_of_line("# " + bad).empty());  // a comment may be in any encoding
  }
}

TEST_CASE("scene_text refuses a scene that could not be read back") {
  SceneFile const sound = parse(hall);
  CHECK_NOTHROW(static_cast<void>(scene_text(sound)));
  SceneFile scene = sound;
  scene.title = "two\nlines";
  CHECK_THROWS_AS(static_cast<void>(scene_text(scene)), FileError);
  scene.title = "a title\ndisc 100 100 1";
  CHECK_THROWS_AS(static_cast<void>(scene_text(scene)), std::invalid_argument);
  scene.title = " blanks around ";
  CHECK_THROWS_AS(static_cast<void>(scene_text(scene)), std::invalid_argument);
  scene = sound;
  scene.trip.start.heading = {2.0, 0.0};
  CHECK_THROWS_AS(static_cast<void>(scene_text(scene)), std::invalid_argument);
  for (double const bad : {std::nan(""), std::numeric_limits<double>::infinity(), -1.0}) {
    scene = sound;
    scene.vehicle.sight = bad;
    CHECK_THROWS_AS(static_cast<void>(scene_text(scene)), FileError);
    scene = sound;
    scene.world.discs[1].disc.radius = bad;
    CHECK_THROWS_AS(static_cast<void>(scene_text(scene)), FileError);
  }
  scene = sound;
  scene.trip.start.heading.x() = std::nan("");
  CHECK_THROWS_AS(static_cast<void>(scene_text(scene)), FileError);
  scene = sound;
  scene.region = {};  // nobody has said where
  CHECK_THROWS_AS(static_cast<void>(scene_text(scene)), FileError);
}

TEST_CASE("every text that a scene begins with, and every scene with a byte changed, is read or refused with a place") {
  std::string const whole = hall;
  int read = 0;
  int refused = 0;
  auto const look_at = [&](std::string const& text) {
    std::string const error = error_in(text);
    ++(error.empty() ? read : refused);
    CHECK((error.empty() || (error.rfind("hall.scene:", 0) == 0 && error.find("expected") != error.npos)));
    if (error.empty()) {
      SceneFile const scene = parse(text);
      check_same(parse(scene_text(scene)), scene);
    }
  };
  for (std::size_t size = 0; size <= whole.size(); ++size) {
    look_at(whole.substr(0, size));
  }
  for (std::size_t i = 0; i < whole.size(); ++i) {
    for (char const c : {'\0', '\n', '#', ' ', '-', '9', 'e', '\xE9'}) {
      std::string changed = whole;
      changed[i] = c;
      look_at(changed);
    }
  }
  CHECK(read > 500);
  CHECK(refused > 500);
}

TEST_CASE("a scene of 100 000 discs is read in linear time") {
  std::string text = "wend scene 1\nstart -5 -5\ngoal -5 2000\n";
  std::size_t const count = 100'000;
  for (std::size_t i = 0; i < count; ++i) {
    text += "disc " + std::to_string(i % 1000) + ".125 " + std::to_string(i / 1000) + ".5 0.2500001\n";
  }
  std::clock_t const before = std::clock();
  SceneFile const scene = parse(text);
  double const seconds = static_cast<double>(std::clock() - before) / CLOCKS_PER_SEC;
  MESSAGE(seconds, " s of CPU time for ", count, " discs");
  REQUIRE(scene.world.discs.size() == count);
  CHECK(scene.world.discs[1234].disc.centre == Vec2<double>{234.125, 1.5});
  CHECK(scene.world.discs.back().disc.centre == Vec2<double>{999.125, 99.5});
  CHECK(scene.region.high.y() == 2001.0);
  // A tenth of a second on a laptop; twenty times that leaves room for sanitizers, and none for squares of 1e5.
  CHECK(seconds < 5.0);
  check_same(parse(scene_text(scene)), scene);
}

TEST_CASE("the sample scene is a hall with twelve discs, one of which moves, and trips can be drawn in it") {
  std::string const file = WEND_TEST_DATA "/../../examples/scenes/seedling-hall.scene";
  SceneFile const scene = parse_scene(file, lab::read_whole(file));
  CHECK(scene.title == "A seedling cart crosses the hall of a greenhouse");
  REQUIRE(scene.world.discs.size() == 12);
  int moving = 0;
  for (lab::WorldDisc const& d : scene.world.discs) {
    moving += d.velocity.norm() > 0.0 ? 1 : 0;
  }
  CHECK(moving == 1);
  CHECK(scene.region.high == Vec2<double>{14.0, 8.0});
  CHECK(scene.vehicle.drive.max_rate == 18.0F);
  CHECK(scene.vehicle.slip == 0.03);
  CHECK(scene.claims.keeps_clear == 0.01);
  CHECK(scene.claims.seen_within == 0.02);
  CHECK(scene.claims.arrives == 0.95);
  CHECK(scene.claims.contacts == 0.02);
  check_same(parse(scene_text(scene)), scene);
  lab::Ground const ground(scene.world);
  for (std::uint64_t run = 0; run < 20; ++run) {
    lab::Trip const trip = lab::drawn_trip(ground, scene.draws(), lab::Draws(1, run));
    CHECK((trip.goal - trip.start.position).norm() >= 6.0);
    CHECK(scene.world.gap(trip.start.position) >= 0.4 - 1e-9);
    CHECK(trip.time_limit == 180.0);
  }
}
