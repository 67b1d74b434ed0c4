// Pictures against the rules of XML 1.0 (W3C 2008) for well-formed documents, as far as they are used here, and against
// what has to be on them. A general-purpose parser reads the pictures of the examples in tests/examples.
#include <algorithm>
#include <cctype>
#include <cmath>
#include <cstddef>
#include <cstdlib>
#include <iterator>
#include <map>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include <doctest/doctest.h>

#include "wend/lab/picture.hpp"
#include "wend/wend.hpp"

namespace {

using namespace wend;

struct Element {
  std::string name;
  std::map<std::string, std::string> attributes;
  std::string text;
};

// Takes a document apart: start tags, end tags, attributes in double quotes, text, the five entities and &#39;. `good`
// tells whether tags balance, there is one root, attributes differ, and no bare < or & is left.
struct Document {
  std::vector<Element> elements;
  bool good = true;

  explicit Document(std::string_view xml) {
    std::vector<std::size_t> open;
    std::size_t at = 0;
    int roots = 0;
    while (good && at < xml.size()) {
      if (xml[at] != '<') {
        std::size_t const end = std::min(xml.find('<', at), xml.size());
        std::string const text = plain(xml.substr(at, end - at));
        bool const blank = text.find_first_not_of(" \n\t") == text.npos;
        if (open.empty()) {
          good = good && blank;
        } else {
          elements[open.back()].text += text;
        }
        at = end;
        continue;
      }
      std::size_t const end = xml.find('>', at);
      if (end == xml.npos) {
        good = false;
        break;
      }
      std::string_view tag = xml.substr(at + 1, end - at - 1);
      at = end + 1;
      if (!tag.empty() && tag.front() == '/') {
        good = !open.empty() && elements[open.back()].name == tag.substr(1);
        if (good) {
          open.pop_back();
        }
        continue;
      }
      bool const closed = !tag.empty() && tag.back() == '/';
      if (closed) {
        tag.remove_suffix(1);
      }
      roots += open.empty() ? 1 : 0;
      add(tag);
      if (!closed) {
        open.push_back(elements.size() - 1);
      }
    }
    good = good && open.empty() && roots == 1;
  }

  [[nodiscard]] std::vector<Element> all(std::string_view name) const {
    std::vector<Element> found;
    std::copy_if(elements.begin(), elements.end(), std::back_inserter(found),
                 [name](Element const& e) { return e.name == name; });
    return found;
  }

 private:
  std::string plain(std::string_view text) {
    std::string out;
    for (std::size_t i = 0; i < text.size(); ++i) {
      unsigned char const c = static_cast<unsigned char>(text[i]);
      good = good && (c >= 0x20 || c == '\n' || c == '\t');
      if (text[i] != '&') {
        out += text[i];
        continue;
      }
      bool known = false;
      for (auto const& [entity, value] :
           {std::pair{"&amp;", '&'}, {"&lt;", '<'}, {"&gt;", '>'}, {"&quot;", '"'}, {"&#39;", '\''}}) {
        if (text.substr(i).rfind(entity, 0) == 0) {
          out += value;
          i += std::string_view(entity).size() - 1;
          known = true;
          break;
        }
      }
      good = good && known;
    }
    return out;
  }

  void add(std::string_view tag) {
    std::size_t const space = std::min(tag.find(' '), tag.size());
    Element element{std::string(tag.substr(0, space)), {}, {}};
    good = good && !element.name.empty() && element.name.find_first_of("<&\"'=") == std::string::npos;
    std::size_t at = space;
    while (good && (at = tag.find_first_not_of(' ', at)) != tag.npos) {
      std::size_t const equals = tag.find("=\"", at);
      std::size_t const quote = equals == tag.npos ? tag.npos : tag.find('"', equals + 2);
      good = quote != tag.npos;
      if (good) {
        std::string const name(tag.substr(at, equals - at));
        std::string const value = plain(tag.substr(equals + 2, quote - equals - 2));
        good = good && !name.empty() &&
               std::all_of(name.begin(), name.end(),
                           [](char c) { return std::isalnum(static_cast<unsigned char>(c)) || c == '-'; }) &&
               element.attributes.emplace(name, value).second;
        at = quote + 1;
        good = good && (at == tag.size() || tag[at] == ' ');
      }
    }
    elements.push_back(std::move(element));
  }
};

double number(Element const& e, char const* name) { return std::strtod(e.attributes.at(name).c_str(), nullptr); }

std::vector<double> numbers(std::string const& text) {
  std::vector<double> values;
  char const* at = text.c_str();
  for (char* end = nullptr;; at = end) {
    while (*at == ',' || *at == ' ') {
      ++at;
    }
    double const value = std::strtod(at, &end);
    if (end == at) {
      return values;
    }
    values.push_back(value);
  }
}

// How many coordinates lie outside of the view box; text counts with its anchor.
int outside(Document const& picture) {
  auto const box = numbers(picture.elements.front().attributes.at("viewBox"));
  int count = 0;
  auto const look = [&](double x, double y, double r) {
    count += x - r >= -0.06 && x + r <= box[2] + 0.06 && y - r >= -0.06 && y + r <= box[3] + 0.06 ? 0 : 1;
  };
  for (Element const& e : picture.elements) {
    if (e.name == "circle") {
      look(number(e, "cx"), number(e, "cy"), number(e, "r"));
    } else if (e.name == "line") {
      look(number(e, "x1"), number(e, "y1"), 0.0);
      look(number(e, "x2"), number(e, "y2"), 0.0);
    } else if (e.name == "text") {
      look(number(e, "x"), number(e, "y"), 0.0);
    } else if (e.name == "polyline") {
      auto const points = numbers(e.attributes.at("points"));
      for (std::size_t i = 0; i + 1 < points.size(); i += 2) {
        look(points[i], points[i + 1], 0.0);
      }
    } else if (e.name == "path") {
      auto const start = numbers(e.attributes.at("d").substr(1));
      look(start[0], start[1], 0.0);
    }
  }
  return count;
}

constexpr Loop<decltype(guarded(below(clearance, 0.3F, 0.5F), past_disc{}, toward_goal{})), Ring<36>> loop{
    .policy = guarded(below(clearance, 0.3F, 0.5F), past_disc{}, toward_goal{}),
    .sensing = {even_bearings<36>(0.0, 0.17453292519943295), 0.05F, 6.0F, 0.01F}};

struct Scene {
  lab::World world;
  lab::Trip trip{{{0.0, 0.0}, {1.0, 0.0}}, {5.0, 0.0}, 60.0};
  std::vector<lab::DrawnRun> runs;
};

Scene two_runs() {
  Scene scene;
  scene.world.add(2.5, 0.1, 0.3);
  scene.world.add(1.0, -1.5, 0.5);
  scene.runs.push_back({"whole", lab::simulate(loop, lab::Vehicle{}, scene.world, scene.trip, 1, 0, true)});
  lab::Trip cut = scene.trip;
  cut.time_limit = 3.0;
  scene.runs.push_back({"cut <short>", lab::simulate(loop, lab::Vehicle{}, scene.world, cut, 1, 0, true)});
  return scene;
}

}  // namespace

TEST_CASE("the check of well-formed documents can tell") {
  CHECK(Document("<a x=\"1\"><b/>t &amp; u</a>\n").good);
  for (char const* bad : {"<a>", "<a></b>", "<a></a><a></a>", "<a>&</a>", "<a>&nbsp;</a>", "<a x=\"1\" x=\"2\"/>", "",
                          "<a x=1/>", "<a", "t<a/>", "<a x=\"&\"/>", "<a><b></a></b>"}) {
    INFO(std::string(bad));
    CHECK_FALSE(Document(bad).good);
  }
}

TEST_CASE("escaped text has no character that means something to XML") {
  CHECK(lab::escaped("a < b && \"c\" > 'd'") == "a &lt; b &amp;&amp; &quot;c&quot; &gt; &#39;d&#39;");
  CHECK(lab::escaped(std::string("tab\tline\nnul\0bell\a", 18)) == "tab\tline\nnul bell ");  // XML 1.0, 2.2: Char
  CHECK(lab::escaped("\xC3\xA9") == "\xC3\xA9");
}

TEST_CASE("a picture is a well-formed document with its title as it was given") {
  Scene const scene = two_runs();
  std::string const title = "<script>\"R&D\" 'n' ]]></script>";
  Document const picture(lab::picture(title, scene.world, scene.trip, scene.runs));
  REQUIRE(picture.good);
  CHECK(picture.elements.front().name == "svg");
  REQUIRE(picture.all("title").size() == 1);
  CHECK(picture.all("title")[0].text == title);
  CHECK(picture.all("script").empty());
}

TEST_CASE("every disc is on the picture, where it stands and as large as it is") {
  Scene const scene = two_runs();
  Document const picture(lab::picture("t", scene.world, scene.trip, scene.runs));
  REQUIRE(picture.good);
  auto const circles = picture.all("circle");
  // The two discs come first; their distance gives the scale: hypot(1.5, 1.6) m.
  double const scale = std::hypot(number(circles[0], "cx") - number(circles[1], "cx"),
                                  number(circles[0], "cy") - number(circles[1], "cy")) /
                       std::hypot(1.5, 1.6);
  CHECK(number(circles[0], "r") == doctest::Approx(0.3 * scale).epsilon(0.002));
  CHECK(number(circles[1], "r") == doctest::Approx(0.5 * scale).epsilon(0.002));
  CHECK(number(circles[0], "cx") > number(circles[1], "cx"));
  CHECK(number(circles[0], "cy") < number(circles[1], "cy"));  // up is up
  // A path starts at the start: 2.5 m to the left of the first disc.
  auto const points = numbers(picture.all("polyline")[0].attributes.at("points"));
  CHECK(points[0] == doctest::Approx(number(circles[0], "cx") - 2.5 * scale).epsilon(0.002));
}

TEST_CASE("every run is on the picture, with its legend, its switches, and a cross where it ended short") {
  Scene const scene = two_runs();
  REQUIRE(scene.runs[0].run.ending == lab::Ending::arrived);
  REQUIRE(scene.runs[0].run.switches >= 2);
  REQUIRE(scene.runs[1].run.ending == lab::Ending::time_out);
  Document const picture(lab::picture("t", scene.world, scene.trip, scene.runs));
  REQUIRE(picture.good);
  CHECK(picture.all("polyline").size() == 2);
  // Discs, dots, and the rings of start and goal.
  CHECK(static_cast<int>(picture.all("circle").size()) ==
        2 + scene.runs[0].run.switches + scene.runs[1].run.switches + 2);
  auto const paths = picture.all("path");
  REQUIRE(paths.size() == 2);  // one cross of a run, and the one in the goal
  auto const end = numbers(picture.all("polyline")[1].attributes.at("points"));
  auto const cross = numbers(paths[0].attributes.at("d").substr(1));
  CHECK(cross[0] + 6.0 == doctest::Approx(end[end.size() - 2]).epsilon(0.001));
  CHECK(cross[1] + 6.0 == doctest::Approx(end[end.size() - 1]).epsilon(0.001));
  int legends = 0;
  for (Element const& e : picture.all("text")) {
    legends += e.text.rfind("whole: arrived after ", 0) == 0 ? 1 : 0;
    legends += e.text.rfind("cut <short>: time out after 3.0 s, least clearance ", 0) == 0 ? 1 : 0;
  }
  CHECK(legends == 2);
}

TEST_CASE("the drawn path keeps within two pixels and a tick of the driven one") {
  Scene const scene = two_runs();
  Document const picture(lab::picture("t", scene.world, scene.trip, scene.runs));
  auto const circles = picture.all("circle");
  double const scale = number(circles[1], "r") / 0.5;
  auto const points = numbers(picture.all("polyline")[0].attributes.at("points"));
  double worst = 0.0;
  for (std::size_t i = 2; i + 1 < points.size(); i += 2) {
    worst = std::max(worst, std::hypot(points[i] - points[i - 2], points[i + 1] - points[i - 1]));
  }
  CHECK(worst < 2.0 + 0.6 * 0.05 * scale + 0.2);  // top speed, period, rounding to tenths
}

TEST_CASE("everything lies within the view box, also what discs that leave are drawn with") {
  Scene scene = two_runs();
  CHECK(outside(Document(lab::picture("t", scene.world, scene.trip, scene.runs))) == 0);
  scene.world.add(4.0, 1.0, 0.4, {3.0, 2.0});  // 15 m to the right and 10 m up in 5 s
  scene.world.add(1.0, 1.0, 0.4, {0.0, -4.0});
  Document const picture(lab::picture("t", scene.world, scene.trip, scene.runs));
  REQUIRE(picture.good);
  CHECK(outside(picture) == 0);
  // The line of the third disc is 5 s of its travel long: hypot(15, 10) m.
  auto const circles = picture.all("circle");
  double const scale = number(circles[1], "r") / 0.5;
  int found = 0;
  for (Element const& e : picture.all("line")) {
    double const length = std::hypot(number(e, "x2") - number(e, "x1"), number(e, "y2") - number(e, "y1"));
    bool const from_disc = e.attributes.at("x1") == circles[2].attributes.at("cx") &&
                           e.attributes.at("y1") == circles[2].attributes.at("cy");
    found += from_disc && std::abs(length - std::hypot(15.0, 10.0) * scale) < 0.02 * length ? 1 : 0;
  }
  CHECK(found == 1);
}

TEST_CASE("grid labels are round, and zero has no sign") {
  // Steps of 0.1 m and 0.2 m: neither is a sum of powers of two, so steps added up from the left miss 0.
  int zeros = 0;
  for (double const reach : {0.4, 0.5, 0.6, 0.7, 0.9, 1.1, 1.3}) {
    lab::World world;
    world.add(-reach, -reach, 0.1);
    for (Element const& e : Document(lab::picture("t", world, {{}, {0.3, 0.3}, 1.0}, {})).all("text")) {
      CHECK(e.text.rfind("-0.0", 0) != 0);
      zeros += e.text == "0.0" ? 1 : 0;
    }
  }
  CHECK(zeros == 14);  // one a side of each picture
}

TEST_CASE("an empty world without runs, and a trip to where one stands, still make a picture") {
  Document const nothing(lab::picture("", lab::World{}, lab::Trip{}, {}));
  CHECK(nothing.good);
  CHECK(outside(nothing) == 0);
  lab::Trip const trip{{}, {3.0, 1.0}, 20.0};
  lab::Run const run = lab::simulate(loop, lab::Vehicle{}, lab::World{}, trip, 1, 0, true);
  REQUIRE(run.ending == lab::Ending::arrived);
  std::string const svg = lab::picture("free", lab::World{}, trip, {{"free", run}});
  CHECK(Document(svg).good);
  CHECK(svg.find("inf") == svg.npos);
  CHECK(svg.find("nan") == svg.npos);
}
