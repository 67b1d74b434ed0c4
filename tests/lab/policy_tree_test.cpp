// The tree of a policy against its source: written out by hand beside it. Escaping against XML 1.0's five entities.
#include <cstddef>
#include <string>

#include <doctest/doctest.h>

#include "../../examples/policies.hpp"
#include "wend/lab/policy_tree.hpp"
#include "wend/wend.hpp"

namespace {

using namespace wend;

// A field and a guard of somebody else's.
struct leftwards {
  Parameter threshold = 0.125F;
  Parameter odd_one = 2.0F;
  bool on_right = true;
  template <Number S, int N>
  constexpr Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    return {left_of(percept.goal_direction), S(threshold)};
  }
};
struct always {
  template <Number S, int N>
  constexpr mask_t<S> operator()(Percept<S, N> const&) const noexcept {
    return S(0.0F) < S(1.0F);
  }
};

std::size_t leaves(lab::PolicyNode const& node) {
  std::size_t count = node.children.empty() && node.kind == "field" ? 1 : 0;
  for (lab::PolicyNode const& child : node.children) {
    count += leaves(child);
  }
  return count;
}

std::string tree(auto const& policy) { return lab::tree_text(lab::policy_tree(policy)); }

}  // namespace

TEST_CASE("the tree of the composed policy has every part and threshold of its source, in order") {
  CHECK(tree(policies::composed) ==
        "blend\n"
        "  weight: ramp  signal clearance, low 0.1 m, high 0.35 m\n"
        "  low: away_from_discs\n"
        "  high: guarded\n"
        "    guard: held  dwell 0.4 s\n"
        "      guard: both\n"
        "        a: below  signal clearance, enter 0.4 m, leave 0.7 m\n"
        "        b: above  signal disc_before_goal, enter 0.1, leave -0.1\n"
        "    inside: past_disc\n"
        "    outside: toward_goal\n");
}

TEST_CASE("an automaton's tree has each mode and each way out of it") {
  constexpr auto policy =
      modes(mode<"going">(toward_goal{}, to<"passing">(below(clearance, 0.3F, 0.5F)),
                          to<"waiting">(either(always{}, negated(above(goal_distance, 2.0F, 1.5F))))),
            mode<"passing">(past_disc{}, to<"going">(above(clearance, 0.5F, 0.4F))),
            mode<"waiting">(away_from_discs{}, to<"going">(always{})));
  CHECK(tree(policy) ==
        "modes\n"
        "  in going: toward_goal\n"
        "    to passing: below  signal clearance, enter 0.3 m, leave 0.5 m\n"
        "    to waiting: either\n"
        "      a: always\n"
        "      b: negated\n"
        "        guard: above  signal goal_distance, enter 2 m, leave 1.5 m\n"
        "  in passing: past_disc\n"
        "    to going: above  signal clearance, enter 0.5 m, leave 0.4 m\n"
        "  in waiting: away_from_discs\n"
        "    to going: always\n");
}

TEST_CASE("arbiters without a number of their own show their parts too") {
  CHECK(tree(null_space(toward_goal{}, away_from_discs{})) ==
        "null_space\n  first: toward_goal\n  second: away_from_discs\n");
  CHECK(tree(priority(toward_goal{}, past_disc{})) == "priority\n  first: toward_goal\n  rest: past_disc\n");
  CHECK(tree(only_when(always{}, past_disc{})) ==
        "guarded\n  guard: always\n  inside: past_disc\n  outside: no_opinion\n");
}

TEST_CASE("shares, filters and votes show their numbers") {
  CHECK(tree(kept_clear(vote<36>(share(1, toward_goal{}), share(2, past_disc{})), 0.6F, 2.0F, 0.05F)) ==
        "kept_clear  speed 0.6, rate 2, margin 0.05\n"
        "  field: vote\n"
        "    share 1: toward_goal\n"
        "    share 2: past_disc\n");
  CHECK(tree(sliding(0.3F, 0.1F, toward_goal{}, past_disc{})) ==
        "sliding  threshold 0.3, width 0.1\n  below: toward_goal\n  above: past_disc\n");
  CHECK(tree(potential_field{}).rfind("potential_field  attraction 1, repulsion 0.05, influence 1, ", 0) == 0);
}

TEST_CASE(
    "a field of somebody else's is told by its name, and a member that the library has no name for by its place") {
  CHECK(tree(leftwards{}) == "leftwards  threshold 0.125, member 2 2, on_right yes\n");
  CHECK(lab::policy_tree(leftwards{}).kind == "field");
  CHECK(lab::policy_tree(always{}).kind == "guard");
  CHECK(lab::policy_tree(below(clearance, 0.3F, 0.5F)).kind == "guard");
  CHECK(lab::policy_tree(ramp(clearance, 0.3F, 0.5F)).kind == "signal");
}

TEST_CASE("the tree has one leaf for each field") {
  CHECK(leaves(lab::policy_tree(policies::hard_switch)) == 2);
  CHECK(leaves(lab::policy_tree(policies::blended)) == 2);
  CHECK(leaves(lab::policy_tree(policies::composed)) == 3);
  CHECK(leaves(lab::policy_tree(blend(share(1, toward_goal{}), share(2, past_disc{}), share(1, roam{})))) == 3);
}

TEST_CASE("as a page the tree escapes what it is told, and nests as the text does") {
  lab::PolicyNode const node{"", "<b>&", "field", {{"a\"", "1<2"}}, {{"in <x>", "y", "guard", {}, {}}}};
  std::string const html = lab::tree_html(node);
  CHECK(html.find("<b>&") == std::string::npos);
  CHECK(html.find("&lt;b&gt;&amp;") != std::string::npos);
  CHECK(html.find("a&quot; <b>1&lt;2</b>") != std::string::npos);
  CHECK(html.find("in &lt;x&gt;") != std::string::npos);
  std::string const composed = lab::tree_html(lab::policy_tree(policies::composed));
  std::size_t items = 0;
  std::size_t lines = 0;
  for (std::size_t at = composed.find("<li>"); at != composed.npos; at = composed.find("<li>", at + 1)) {
    ++items;
  }
  for (char const c : tree(policies::composed)) {
    lines += c == '\n' ? 1 : 0;
  }
  CHECK(items == lines);
  CHECK(items == 10);
}
