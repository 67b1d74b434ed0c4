// Any text as a scene: refused with a place in it, or read; then it can be used, and is written and read again with the
// same bits in every number.
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <exception>
#include <string>
#include <type_traits>
#include <vector>

#include "target.hpp"
#include "wend/lab/csv.hpp"
#include "wend/lab/scene_file.hpp"

namespace {

namespace lab = wend::lab;

// Every number of a scene, in one order.
std::vector<double> numbers_of(lab::SceneFile const& scene) {
  wend::Pose<double> const& start = scene.trip.start;
  std::vector<double> all{start.position.x(),   start.position.y(),    start.heading.x(),     start.heading.y(),
                          scene.trip.goal.x(),  scene.trip.goal.y(),   scene.trip.time_limit, scene.region.low.x(),
                          scene.region.low.y(), scene.region.high.x(), scene.region.high.y()};
  lab::detail::for_each_setting(scene, [&all]<typename T>(char const*, char const*, T const& value, auto const&) {
    if constexpr (std::is_arithmetic_v<T>) {
      all.push_back(static_cast<double>(value));  // exact for a float
    } else {
      all.push_back(value ? 1.0 : 0.0);
      all.push_back(value.value_or(0.0));
    }
  });
  for (lab::WorldDisc const& d : scene.world.discs) {
    all.insert(all.end(), {d.disc.centre.x(), d.disc.centre.y(), d.disc.radius, d.velocity.x(), d.velocity.y()});
  }
  return all;
}

void hold_of_scene(lab::SceneFile const& scene) {
  std::vector<double> const numbers = numbers_of(scene);
  for (double const number : numbers) {
    fuzz::hold(std::isfinite(number), "every number is finite");
  }
  fuzz::hold(static_cast<bool>(wend::sound(scene.trip.start)), "the start has a heading");
  fuzz::hold(scene.world.gap(scene.trip.start.position) > scene.vehicle.radius, "the start is clear");
  fuzz::hold(scene.region.low.x() < scene.region.high.x() && scene.region.low.y() < scene.region.high.y(),
             "the region is some");
  fuzz::hold(scene.vehicle.period > 0.0 && scene.vehicle.jitter < 1.0, "a run comes to its end");
  std::string text;
  try {
    text = lab::scene_text(scene);
    lab::SceneFile const again = lab::parse_scene("again", text);
    std::vector<double> const same = numbers_of(again);
    fuzz::hold(again.title == scene.title && same.size() == numbers.size(), "as much is read again");
    for (std::size_t i = 0; i < same.size(); ++i) {
      fuzz::hold(fuzz::same_bits(same[i], numbers[i]), "each number is read again to the bit");
    }
    fuzz::hold(lab::scene_text(again) == text, "and written the same");
  } catch (std::exception const& error) {
    std::fprintf(stderr, "%s in\n%s", error.what(), text.c_str());
    fuzz::hold(false, "what was read can be written and read");
  }
}

}  // namespace

extern "C" int LLVMFuzzerTestOneInput(std::uint8_t const* data, std::size_t size) {
  std::string text(size, '\0');
  for (std::size_t i = 0; i < size; ++i) {
    text[i] = static_cast<char>(data[i]);
  }
  try {
    hold_of_scene(lab::parse_scene("f", text));
  } catch (lab::FileError const& error) {
    std::string const what = error.what();
    fuzz::hold(what.rfind("f:", 0) == 0 && what.find("expected") != what.npos, "an error says where and what");
  }
  return 0;
}
