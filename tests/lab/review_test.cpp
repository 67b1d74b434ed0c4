// What a review says against bounds worked out elsewhere: R's binom.test for shares (values as R prints them, from
// memory where marked), and what a page, JSON (RFC 8259) and CSV (RFC 4180) have to be.
#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <set>
#include <string>
#include <vector>

#include <doctest/doctest.h>

#include "../../examples/cellar.hpp"
#include "../../examples/policies.hpp"
#include "wend/lab/review.hpp"
#include "wend/lab/review_json.hpp"
#include "wend/lab/review_page.hpp"
#include "wend/lab/row_table.hpp"
#include "wend/wend.hpp"

namespace {

using namespace wend;

std::size_t count(std::string const& in, std::string const& what) {
  std::size_t n = 0;
  for (std::size_t at = in.find(what); at != in.npos; at = in.find(what, at + what.size())) {
    ++n;
  }
  return n;
}

// Two discs, two policies, a few runs; with names that mean mischief.
lab::Review small_review(int threads, std::atomic<bool> const* stop = nullptr) {
  lab::Review review{"<script>alert(1)</script> & \"more\"",
                     {},
                     {{{0.0, 0.0}, {1.0, 0.0}}, {4.0, 0.0}, 40.0},
                     {{-1.0, -2.0}, {5.0, 2.0}},
                     7,
                     40,
                     true,
                     {}};
  review.world.add(2.0, 0.3, 0.3);
  review.world.add(2.5, -1.2, 0.3);
  lab::Scenes const drawn{{review.world},
                          [](lab::Ground const& ground, lab::Draws const& draws) {
                            return lab::drawn_trip(ground, {{{-1.0, -2.0}, {5.0, 2.0}}, 0.4, 3.0, 40.0}, draws);
                          },
                          {}};
  lab::ReviewOptions options;
  options.seed = 7;
  options.runs = 40;
  options.threads = threads;
  options.cell = 0.1;
  options.worst = 2;
  options.stop = stop;
  lab::Claims const claims{.keeps_clear = 0.0, .seen_within = 0.01, .arrives = 0.5, .contacts = 0.2};
  lab::add_review(review, "two, \"thresholds\"", policies::two_thresholds, cellar::ring, cellar::cart(), drawn, claims,
                  options);
  // Of the same type as the first, which halves what is compiled.
  constexpr auto other = guarded(below(clearance, 0.35F, 0.35F), past_disc{}, toward_goal{});
  lab::add_review(review, "</style><b>blend", other, cellar::ring, cellar::cart(), drawn, claims, options);
  return review;
}

}  // namespace

TEST_CASE("a share is claimed, doubted or denied by Clopper and Pearson's one-sided bounds") {
  // After no failure in n runs the bound is 1 - 0.05^(1/n), in closed form: 0.0295130 for 100.
  auto const none = lab::contact_statement(0.03, 0, 100);
  CHECK(none.holds == lab::Holds::yes);
  CHECK(lab::contact_statement(0.029, 0, 100).holds == lab::Holds::open);
  CHECK(lab::contact_statement(0.001, 100, 100).holds == lab::Holds::no);
  CHECK(lab::arrival_statement(0.97, 100, 100).holds == lab::Holds::yes);
  CHECK(lab::arrival_statement(0.971, 100, 100).holds == lab::Holds::open);
  // binom.test(7, 10, alternative = "greater") of R: from 0.3933758; "less": up to 0.9127356 (from memory; both follow
  // from the beta quantiles of the definition, which published/binomial_bounds_test.cpp checks).
  CHECK(lab::arrival_statement(0.3933, 7, 10).holds == lab::Holds::yes);
  CHECK(lab::arrival_statement(0.3934, 7, 10).holds == lab::Holds::open);
  CHECK(lab::arrival_statement(0.9127, 7, 10).holds == lab::Holds::open);
  CHECK(lab::arrival_statement(0.9128, 7, 10).holds == lab::Holds::no);
  CHECK(lab::arrival_statement(0.5, 0, 0).holds == lab::Holds::open);
  CHECK(lab::contact_statement(0.5, 0, 0).holds == lab::Holds::open);
}

TEST_CASE("a statement says what it rests on") {
  auto const proved = lab::clearance_statement(0.01, 0.02, lab::Verdict::proved, 1234);
  CHECK(proved.holds == lab::Holds::yes);
  CHECK(proved.basis == lab::Basis::proof);
  CHECK(proved.evidence.find("1234 boxes") != std::string::npos);
  CHECK(lab::clearance_statement(0.01, 0.02, lab::Verdict::refuted, 1).holds == lab::Holds::no);
  CHECK(lab::clearance_statement(0.01, 0.02, lab::Verdict::undecided, 1).holds == lab::Holds::open);
  CHECK(lab::arrival_statement(0.5, 9, 10).basis == lab::Basis::count);
}

TEST_CASE("a review is the same on one thread and on two, page and all") {
  lab::Review const one = small_review(1);
  lab::Review const two = small_review(2);
  CHECK(lab::review_json(one) == lab::review_json(two));
  CHECK(lab::review_page(one, {"again"}, 0.2) == lab::review_page(two, {"again"}, 0.2));
}

TEST_CASE("the page holds all there is, needs nothing from elsewhere, and lets no text out of its place") {
  lab::Review const review = small_review(2);
  REQUIRE(review.complete);
  std::string const page = lab::review_page(review, {"make & <again>"}, 0.2);
  // Nothing is fetched: no address, no import, no other file (XML's own name is none that is fetched).
  CHECK(page.find("http") == std::string::npos);
  CHECK(page.find("url(//") == std::string::npos);
  CHECK(page.find("@import") == std::string::npos);
  CHECK(page.find(" src=") == std::string::npos);
  // Titles and names are text.
  CHECK(page.find("<script>alert") == std::string::npos);
  CHECK(page.find("&lt;script&gt;alert(1)&lt;/script&gt; &amp; &quot;more&quot;") != std::string::npos);
  CHECK(page.find("<b>blend") == std::string::npos);
  CHECK(page.find("make &amp; &lt;again&gt;") != std::string::npos);
  CHECK(count(page, "</style>") == 1);
  CHECK(count(page, "</script>") == 2);
  // What two maps call their patterns differs, though their cells may be the same.
  std::set<std::string> names;
  for (std::size_t at = page.find("<pattern id=\""); at != page.npos; at = page.find("<pattern id=\"", at + 1)) {
    names.insert(page.substr(at, page.find("-hatched", at) - at));
  }
  CHECK(names.size() == 2);
  // A section a policy; a map with three runs and three charts in each; a text for every picture.
  CHECK(count(page, "<section class=\"policy\"") == 2);
  CHECK(count(page, "<svg class=\"map\"") == 2);
  CHECK(count(page, "<g class=\"run\"") == 6);
  CHECK(count(page, "<figure class=\"chart-of\"") == 6);
  CHECK(count(page, "role=\"img\" aria-label=\"") == 2 + 6 + 4);
  CHECK(count(page, "<button type=\"button\" class=\"show\"") == 4);
  CHECK(page.find("no safety function") < page.find("<h2"));  // cautions come first
  for (lab::PolicyReview const& policy : review.policies) {
    for (lab::Statement const& s : policy.statements) {
      CHECK(page.find(lab::escaped(s.claim)) != std::string::npos);
      CHECK(page.find(lab::escaped(s.evidence)) != std::string::npos);
    }
  }
}

TEST_CASE("tags of the page are closed in the order they were opened") {
  // HTML Living Standard, 13.1.2: the elements that have no end tag, of those used here. SVG's own end with "/>".
  std::string const page = lab::review_page(small_review(2), {}, 0.2);
  std::vector<std::string> open;
  bool good = true;
  // Up to the scripts, which are text.
  std::string const body = page.substr(page.find("<body>"), page.find("<script") - page.find("<body>"));
  for (std::size_t at = body.find('<'); at != body.npos && good; at = body.find('<', at + 1)) {
    std::string const tag = body.substr(at + 1, body.find('>', at) - at - 1);
    std::size_t const first = tag.front() == '/' ? 1 : 0;
    std::string const name = tag.substr(first, tag.find_first_of(" /", first) - first);
    if (first == 1) {
      good = !open.empty() && open.back() == name;
      open.resize(open.size() - (good ? 1 : 0));
    } else if (name != "input" && name != "br" && tag.back() != '/') {
      open.push_back(name);
    }
  }
  CHECK(good);
  CHECK(open == std::vector<std::string>{"body"});  // which the scripts are left of
}

TEST_CASE("the worst runs on the page are those of the campaign, bit for bit") {
  lab::Review const review = small_review(2);
  for (lab::PolicyReview const& policy : review.policies) {
    REQUIRE(policy.worst.size() == 2);
    for (lab::Replay const& replay : policy.worst) {
      CHECK(replay.row == policy.rows[static_cast<std::size_t>(replay.row.run)]);
      CHECK(replay.run.ticks.size() > 10);
    }
  }
}

TEST_CASE("a review that is interrupted says so, and keeps what it has") {
  std::atomic<bool> const stop{true};
  lab::Review const review = small_review(1, &stop);
  CHECK_FALSE(review.complete);
  CHECK(review.policies.size() == 2);
  CHECK_FALSE(review.policies.front().arrivals.has_value());
  std::string const page = lab::review_page(review, {}, 0.2);
  CHECK(page.find("Interrupted.") != std::string::npos);
  CHECK(lab::review_json(review).find("\"complete\":false") != std::string::npos);
}

TEST_CASE("rows as a table have as many cells as names, and a quoted policy (RFC 4180)") {
  lab::RunRow row;
  row.run = 3;
  row.time = 1.25;
  std::string const line = lab::row_table("a,\"b\"", std::array{row});
  CHECK(line.rfind("\"a,\"\"b\"\"\",3,0,time out,ok,1.2500,", 0) == 0);
  std::string const plain = lab::row_table("ab", std::array{row});
  CHECK(std::count(plain.begin(), plain.end(), ',') ==
        std::count(lab::row_table_names, lab::row_table_names + std::string(lab::row_table_names).size(), ','));
  CHECK(plain.find(",,") != std::string::npos);  // no disc was met: an empty cell
}
