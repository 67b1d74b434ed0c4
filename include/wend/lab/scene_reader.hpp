// wend/lab/scene_reader.hpp - reads the text of a scene: see scene_file.hpp for what may stand in it.
#pragma once

#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <string>
#include <string_view>
#include <type_traits>
#include <utility>
#include <vector>

#include "wend/disc.hpp"
#include "wend/lab/csv.hpp"
#include "wend/lab/scene_line.hpp"
#include "wend/lab/scene_parts.hpp"
#include "wend/lab/scene_words.hpp"
#include "wend/lab/utf8.hpp"
#include "wend/lab/world.hpp"
#include "wend/plane.hpp"

namespace wend::inline v0::lab {

namespace detail {

// Reads a scene line by line.
class SceneReader {
 public:
  explicit SceneReader(std::string const& file) : file_(file) {}

  [[nodiscard]] SceneFile read(std::string_view content) {
    if (content.substr(0, 3) == "\xEF\xBB\xBF") {
      content.remove_prefix(3);
    }
    bool begun = false;
    std::size_t number = 0;
    while (!content.empty()) {
      SceneLine const line(file_, ++number, content);
      if (line.words().empty()) {
        continue;
      }
      if (begun) {
        read_line(line);
      } else {
        read_first(line);
        begun = true;
      }
    }
    ++number;  // what is missing is missing behind the last line
    if (!begun) {
      throw FileError(file_, number, 1, "expected 'wend scene 1', found the end");
    }
    for (SceneWord const* const word : {&start_word, &goal_word}) {
      if (noted(word->name) == nullptr) {
        throw FileError(file_, number, 1, "expected a line " + word->usage() + ", found the end");
      }
    }
    expect_free_ends();
    if (noted("region") == nullptr) {
      scene_.region = region_around(scene_.world, scene_.trip);
    }
    return std::move(scene_);
  }

 private:
  struct Noted {
    std::string word;
    std::size_t line;
    std::size_t column;
  };

  static void read_first(SceneLine const& line) {
    std::array<std::string_view, 3> const words{"wend", "scene", "1"};
    for (std::size_t i = 0; i < words.size(); ++i) {
      if (i >= line.words().size() || line.words()[i].text != words[i]) {
        throw line.wrong_word(i, "'wend scene 1'");
      }
    }
    if (line.words().size() > words.size()) {
      throw line.wrong_word(words.size(), "the end of the line");
    }
  }

  void read_line(SceneLine const& line) {
    std::string_view const word = line.words()[0].text;
    if (word == "disc") {
      auto const v = numbers<3>(disc_word, line);
      add_disc(line, {{{v[0], v[1]}, v[2]}});
    } else if (word == "moving_disc") {
      auto const v = numbers<5>(moving_disc_word, line);
      add_disc(line, {{{v[0], v[1]}, v[2]}, {v[3], v[4]}});
    } else if (word == "start") {
      auto const v = numbers<2>(start_word, line);
      scene_.trip.start.position = {v[0], v[1]};
    } else if (word == "goal") {
      auto const v = numbers<2>(goal_word, line);
      scene_.trip.goal = {v[0], v[1]};
    } else if (word == "time_limit") {
      scene_.trip.time_limit = numbers<1>(time_limit_word, line)[0];
    } else if (word == "region") {
      read_region(line);
    } else if (word == "heading") {
      read_heading(line);
    } else if (word == "title") {
      read_title(line);
    } else if (word == "draw" || word == "drive" || word == "vehicle" || word == "claim") {
      read_setting(line);
    } else {
      throw line.wrong_word(
          0, "title, disc, moving_disc, start, heading, goal, time_limit, region, draw, vehicle, drive or claim");
    }
  }

  template <std::size_t Count>
  [[nodiscard]] std::array<double, Count> numbers(SceneWord const& word, SceneLine const& line) {
    if (word.once) {
      note(line, word.name);
    }
    line.expect_words(Count, word.usage());
    std::array<double, Count> values{};
    for (std::size_t i = 0; i < Count; ++i) {
      values[i] = line.number<double>(i + 1, word.numbers[i].name, word.numbers[i].range);
    }
    return values;
  }

  void add_disc(SceneLine const& line, WorldDisc const& disc) {
    scene_.world.discs.push_back(disc);
    disc_lines_.push_back(line.number());
  }

  void read_region(SceneLine const& line) {
    auto const v = numbers<4>(region_word, line);
    for (std::size_t const i : {std::size_t{0}, std::size_t{1}}) {
      if (!(v[i] < v[i + 2])) {
        throw line.wrong_word(i + 3,
                              std::string(region_word.numbers[i + 2].name) + " over " + region_word.numbers[i].name);
      }
    }
    scene_.region = {{v[0], v[1]}, {v[2], v[3]}};
  }

  void read_heading(SceneLine const& line) {
    note(line, "heading");
    if (line.words().size() != 3) {
      line.expect_words(line.words().size() < 3 ? 1 : 2, "'heading DEGREES' or 'heading DX DY'");
      scene_.trip.start.heading = heading_at(line.number<double>(1, "DEGREES", {-360.0, 360.0, "degrees"}));
      return;
    }
    Vec2<double> const v{line.number<double>(1, "DX", a_place), line.number<double>(2, "DY", a_place)};
    double const length = std::hypot(v.x(), v.y());
    if (!(length >= 1.0e-6)) {
      throw line.wrong_word(1, "a heading of some length");
    }
    bool const is_unit = std::abs(length - 1.0) <= 1.0e-12;
    scene_.trip.start.heading = is_unit ? v : Vec2<double>(v / length);
  }

  void read_title(SceneLine const& line) {
    note(line, "title");
    std::string_view const title = line.rest();
    if (title.empty() || !is_utf8(title)) {
      throw line.wrong(line.words()[0].column,
                       title.empty() ? "expected 'title TEXT', found no text" : "expected a title in UTF-8");
    }
    scene_.title = title;
  }

  void read_setting(SceneLine const& line) {
    std::string_view const group = line.words()[0].text;
    std::string const usage = "'" + std::string(group) + " NAME NUMBER'";
    if (line.words().size() < 2) {
      throw line.wrong_word(1, usage);
    }
    std::string_view const name = line.words()[1].text;
    bool found = false;
    std::string known;
    for_each_setting(scene_, [&]<typename T>(char const* of, char const* called, T& value, NumberRange const& range) {
      if (group != of) {
        return;
      }
      known += (known.empty() ? "" : ", ") + std::string(called);
      if (name != called) {
        return;
      }
      std::string const both = std::string(of) + " " + called;
      note(line, both);
      line.expect_words(2, usage);
      if constexpr (std::is_same_v<T, float>) {
        value = line.number<float>(2, both, range);
      } else {
        value = line.number<double>(2, both, range);
      }
      found = true;
    });
    if (!found) {
      throw line.wrong_word(1, "one of " + known);
    }
  }

  // Once is enough of most words.
  void note(SceneLine const& line, std::string_view word) {
    if (Noted const* const before = noted(word); before != nullptr) {
      throw line.wrong(line.words()[0].column, "expected '" + std::string(word) + "' once, found it on line " +
                                                   std::to_string(before->line) + " too");
    }
    noted_.push_back({std::string(word), line.number(), line.words()[0].column});
  }
  // Null where there is none.
  [[nodiscard]] Noted const* noted(std::string_view word) const {
    auto const found =
        std::find_if(noted_.begin(), noted_.end(), [word](Noted const& one) { return one.word == word; });
    return found == noted_.end() ? nullptr : &*found;
  }
  [[nodiscard]] FileError wrong_at(std::string_view word, std::string const& what) const {
    Noted const* const where = noted(word);
    return {file_, where->line, where->column, what};
  }

  void expect_free_ends() const {
    for (std::size_t i = 0; i < disc_lines_.size(); ++i) {
      WorldDisc const& d = scene_.world.discs[i];
      if (!(v0::gap(d.disc, scene_.trip.start.position) > scene_.vehicle.radius)) {
        throw wrong_at("start",
                       "expected a start where the whole body is clear of all discs, found it at " + disc_of(i));
      }
      if (d.velocity.squaredNorm() == 0.0 && !(v0::gap(d.disc, scene_.trip.goal) > 0.0)) {
        throw wrong_at("goal", "expected a goal clear of all discs at rest, found it in " + disc_of(i));
      }
    }
  }

  [[nodiscard]] std::string disc_of(std::size_t i) const {
    return "the disc of line " + std::to_string(disc_lines_[i]);
  }

  std::string const& file_;
  SceneFile scene_;
  std::vector<std::size_t> disc_lines_;
  std::vector<Noted> noted_;  // no more than there are words
};

}  // namespace detail

}  // namespace wend::inline v0::lab
