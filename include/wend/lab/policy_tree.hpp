// wend/lab/policy_tree.hpp - a policy as a tree: what it is composed of, with every threshold and gain.
#pragma once

#include <array>
#include <concepts>
#include <cstddef>
#include <cstdio>
#include <string>
#include <string_view>
#include <tuple>
#include <type_traits>
#include <utility>
#include <vector>

#include "wend/arbiters/blend.hpp"
#include "wend/arbiters/guard.hpp"
#include "wend/arbiters/modes.hpp"
#include "wend/arbiters/vote.hpp"
#include "wend/field.hpp"
#include "wend/lab/account.hpp"
#include "wend/lab/member_names.hpp"
#include "wend/lab/svg.hpp"
#include "wend/members.hpp"
#include "wend/percept.hpp"

namespace wend::inline v0::lab {

/// One part of a policy.
struct PolicyNode {
  std::string part;  ///< what it is of the part above: "inside", "guard"; empty at the top
  std::string name;  ///< what it is called: "guarded", "past_disc"
  std::string kind;  ///< "field", "guard", "signal" (also weights), or "data"
  std::vector<std::pair<std::string, std::string>> values{};  ///< thresholds and gains: name, number
  std::vector<PolicyNode> children{};                         ///< in the order they are written
};

namespace detail {

// Neither infinite nor with more digits than a float has: "0.4".
inline std::string parameter_text(Parameter value) {
  std::array<char, 40> text{};
  std::snprintf(text.data(), text.size(), "%.6g", static_cast<double>(value));
  return text.data();
}

// How a part is written in the source: guarded_field is made by guarded(...), and potential_field is none of those.
inline std::string written_name(PolicyNode const& node) {
  std::string name = node.name;
  bool const composed = node.kind != "field" || !node.children.empty();
  for (std::string_view const ending : {"_field", "_guard", "_weight"}) {
    if (composed && name.size() > ending.size() &&
        name.compare(name.size() - ending.size(), ending.size(), ending) == 0) {
      name.resize(name.size() - ending.size());
    }
  }
  return name == "blended" ? "blend" : name;
}

template <typename F>
concept AnswersYes = requires(F const& f, Percept<float, 1> const& percept) {
  { f(percept) } -> std::same_as<bool>;
};
template <typename F>
concept RemembersAndAnswersYes =
    requires { typename F::template Memory<float>; } &&
    std::invocable<F const&, Percept<float, 1> const&, memory_t<F, float>&> &&
    std::same_as<std::invoke_result_t<F const&, Percept<float, 1> const&, memory_t<F, float>&>, bool>;

// Fields and guards can be asked about a percept, and so can signals and weights; anything else is data, such as a
// path.
template <typename F>
std::string kind_of() {
  if constexpr (HeadingField<F>) {
    return "field";
  } else if constexpr (AnswersYes<F> || RemembersAndAnswersYes<F>) {
    return "guard";
  } else {
    return std::invocable<F const&, Percept<float, 1> const&> ? "signal" : "data";
  }
}

template <typename F>
PolicyNode node_of(F const& f, std::string part);

// A member of a part: a number, a part of its own, or a row of them.
template <typename Member>
void add_member(PolicyNode& node, std::string const& name, Member const& member);

// What consists of parts without a number has no size, and cannot be taken apart by place: by name, then.
#define WEND_ADD_PART(name)             \
  if constexpr (requires { f.name; }) { \
    add_member(node, #name, f.name);    \
  }

template <typename F>
void add_members(PolicyNode& node, F const& f) {
  if constexpr (std::is_empty_v<F>) {
    WEND_ADD_PART(guard)
    WEND_ADD_PART(a)
    WEND_ADD_PART(b)
    WEND_ADD_PART(inside)
    WEND_ADD_PART(outside)
    WEND_ADD_PART(first)
    WEND_ADD_PART(second)
    WEND_ADD_PART(rest)
    WEND_ADD_PART(modes)
    WEND_ADD_PART(ways)
    WEND_ADD_PART(field)
  } else if constexpr (std::is_aggregate_v<F>) {
    std::size_t place = 0;
    v0::for_each_member(f, f, [&](auto const& member, auto const&) {
      ++place;
      add_member(node, name_of_part(f, member, place), member);
    });
  }
}

#undef WEND_ADD_PART

template <typename T>
inline constexpr bool is_row = false;
template <typename... Things>
inline constexpr bool is_row<v0::detail::Row<Things...>> = true;

// Rows of modes, of ways out of a mode, and of voters: their things are parts of what they are in.
template <typename Row>
void add_row(PolicyNode& node, std::string const& name, Row const& row) {
  if constexpr (requires { row.first, row.rest; }) {
    add_member(node, name, row.first);
    add_row(node, name, row.rest);
  }
}
template <typename Voters>
void add_voters(PolicyNode& node, Voters const& voters) {
  if constexpr (Voters::count > 0) {
    node.children.push_back(node_of(voters.field, "share " + parameter_text(voters.weight)));
    add_voters(node, voters.rest);
  }
}

template <typename Member>
void add_member(PolicyNode& node, std::string const& name, Member const& member) {
  if constexpr (std::is_same_v<Member, bool>) {
    node.values.emplace_back(name, member ? "yes" : "no");
  } else if constexpr (std::is_arithmetic_v<Member>) {
    node.values.emplace_back(name, parameter_text(static_cast<Parameter>(member)) + (name == "dwell" ? " s" : ""));
  } else if constexpr (is_row<Member>) {
    add_row(node, name, member);
  } else if constexpr (requires { Member::count, member.weights(); }) {
    add_voters(node, member);
  } else if constexpr (requires { Member::name.text, member.ways; }) {  // a mode
    PolicyNode mode = node_of(member.field, std::string("in ") + Member::name.text);
    add_member(mode, "", member.ways);
    node.children.push_back(std::move(mode));
  } else if constexpr (requires { Member::target.text; }) {  // a way out of one
    node.children.push_back(node_of(member.guard, std::string("to ") + Member::target.text));
  } else if constexpr (requires { std::tuple_size<Member>::value; }) {
    node.values.emplace_back(name, std::to_string(std::tuple_size_v<Member>) + " entries");
  } else if constexpr (std::is_class_v<Member>) {
    node.children.push_back(node_of(member, name));
  }
}

// A guard reads as one line: its signal is no part of its own. Of the library's signals two are lengths.
template <typename F>
void add_thresholds(PolicyNode& node, F const& f) {
  std::string const signal = lab::name_of(f.signal);
  std::string const unit = signal == "clearance" || signal == "goal_distance" ? " m" : "";
  auto const add = [&](char const* name, Parameter value) {
    node.values.emplace_back(name, parameter_text(value) + unit);
  };
  node.values.emplace_back("signal", signal);
  if constexpr (requires { f.enter + f.leave; }) {
    add("enter", f.enter), add("leave", f.leave);
  } else {
    add("low", f.low), add("high", f.high);
  }
}

template <typename Join, typename A, typename B>
std::string joined_name(joined_guard<Join, A, B> const&) {
  return std::is_same_v<Join, v0::detail::And> ? "both" : "either";
}

template <typename F>
PolicyNode node_of(F const& f, std::string part) {
  PolicyNode node{std::move(part), lab::name_of(f), kind_of<F>()};
  if constexpr (requires { joined_name(f); }) {
    node.name = joined_name(f);
  }
  if constexpr (requires { f.signal; } && (requires { f.enter + f.leave; } || requires { f.low + f.high; })) {
    add_thresholds(node, f);
  } else {
    add_members(node, f);
  }
  node.name = written_name(node);
  return node;
}

inline void add_text(std::string& text, PolicyNode const& node, std::size_t depth) {
  text += std::string(2 * depth, ' ') + (node.part.empty() ? "" : node.part + ": ") + node.name;
  for (std::size_t i = 0; i < node.values.size(); ++i) {
    text += (i == 0 ? "  " : ", ") + node.values[i].first + " " + node.values[i].second;
  }
  text += "\n";
  for (PolicyNode const& child : node.children) {
    add_text(text, child, depth + 1);
  }
}

// Kinds differ in shape: fields have square boxes, guards round ones, others none.
inline void add_html(std::string& html, PolicyNode const& node) {
  html += "<li>" + (node.part.empty() ? "" : "<span class=\"part\">" + escaped(node.part) + "</span> ") +
          "<span class=\"" + node.kind + "\">" + escaped(node.name) + "</span>";
  for (std::size_t i = 0; i < node.values.size(); ++i) {
    html += (i == 0 ? " <span class=\"value\">" : ", <span class=\"value\">") + escaped(node.values[i].first) + " <b>" +
            escaped(node.values[i].second) + "</b></span>";
  }
  if (!node.children.empty()) {
    html += "\n<ul>";
    for (PolicyNode const& child : node.children) {
      add_html(html, child);
    }
    html += "</ul>";
  }
  html += "</li>\n";
}

}  // namespace detail

/// The tree of a policy, or of any field, guard or signal: a node for each part that is a plain struct, with its
/// numbers as values. What is yours shows too; a member is called by its name in the source where that is one the
/// library uses, else "member 2", counted from 1. Metres, seconds, and the units of signals.
template <typename F>
[[nodiscard]] PolicyNode policy_tree(F const& f) {
  return detail::node_of(f, "");
}

/// The tree as lines, indented by two blanks a level.
[[nodiscard]] inline std::string tree_text(PolicyNode const& node) {
  std::string text;
  detail::add_text(text, node, 0);
  return text;
}

/// The tree as nested lists for a page, which read well without the style below, too.
[[nodiscard]] inline std::string tree_html(PolicyNode const& node) {
  std::string html = "<ul class=\"policy-tree\">";
  detail::add_html(html, node);
  return html + "</ul>\n";
}

/// How the lists look, by the page's colours --ink, --soft, --rule, --edge and --card.
inline constexpr char const* tree_css = R"css(
.policy-tree, .policy-tree ul { list-style: none; margin: 0; padding: 0; }
.policy-tree ul { margin-left: 0.55rem; padding-left: 0; border-left: 2px solid var(--rule); }
.policy-tree li { padding: 0.14rem 0; line-height: 1.7; }
.policy-tree ul > li { padding-left: 1.1rem; position: relative; }
.policy-tree ul > li::before { content: ""; position: absolute; left: 0; top: 1em; width: 0.8rem;
  border-top: 2px solid var(--rule); }
.policy-tree .part { color: var(--soft); font-size: 0.88rem; }
.policy-tree .field, .policy-tree .guard { border: 1.5px solid var(--edge); background: var(--card);
  padding: 0.05rem 0.45rem; font-weight: 600; white-space: nowrap; }
.policy-tree .guard { border-radius: 1rem; border-style: dashed; }
.policy-tree .signal { font-style: italic; }
.policy-tree .value { color: var(--soft); font-size: 0.9rem; white-space: nowrap; }
.policy-tree .value b { color: var(--ink); font-variant-numeric: tabular-nums; }
)css";

}  // namespace wend::inline v0::lab
