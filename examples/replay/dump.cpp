// A dump of a decision log: decided again, compared bit by bit, and explained.
#include <cstddef>
#include <cstdio>
#include <string>
#include <vector>

#include <wend/lab/csv.hpp>
#include <wend/lab/decide_again.hpp>
#include <wend/lab/dump.hpp>
#include <wend/lab/explain_tick.hpp>

#include "replay.hpp"

namespace replay {

namespace {

using namespace wend;

// The dump in hand, whether a loop was found that it is of, and why the one that was asked for is not.
struct Search {
  Options const& options;
  std::string const& bytes;
  lab::DumpHeader header;
  bool found = false;
  int code = 0;
  std::string why_not{};
};

template <typename Seen, typename Loop>
int decide_all(Loop const& loop, std::string const& policy, Search const& search) {
  lab::Dump<Loop, Seen> const dump = lab::read_dump<Seen>(search.options.dump, search.bytes, loop);
  std::printf("%s: %u decisions of the policy '%s', from tick %u\n", search.options.dump.c_str(), dump.header.records,
              policy.c_str(), dump.header.first);
  std::printf("Angles in degrees off the nose, to the left positive.\n\n");
  std::size_t differing = 0;
  for (std::size_t i = 0; i < dump.decisions.size(); ++i) {
    if (!search.options.brief && i % static_cast<std::size_t>(search.options.every) == 0) {
      std::printf("%s\n", lab::explain_tick(loop, dump.decisions[i]).text().c_str());
    }
    auto const* next = i + 1 < dump.decisions.size() ? &dump.decisions[i + 1] : nullptr;
    auto const differences = lab::decide_again(loop, dump.decisions[i], next);
    differing += differences.empty() ? 0U : 1U;
    for (std::string const& difference : differences) {
      std::fflush(stdout);
      std::fprintf(stderr, "replay: %s: %s\n", search.options.dump.c_str(), difference.c_str());
    }
  }
  if (!dump.overwritten.empty()) {
    std::printf("%zu records were overwritten while the machine dumped them\n", dump.overwritten.size());
  }
  std::printf("%zu of %zu decisions fall as they were logged, bit by bit\n", dump.decisions.size() - differing,
              dump.decisions.size());
  if (!dump.damage.empty()) {
    std::fflush(stdout);
    throw lab::FileError(search.options.dump, dump.damage);
  }
  return differing == 0 ? 0 : 1;
}

template <typename Seen, typename Loop>
void try_loop(Loop const& loop, std::string const& policy, Search& search) {
  if (search.found || (!search.options.policy.empty() && search.options.policy != policy)) {
    return;
  }
  search.why_not = lab::misfit<Seen>(search.header, loop);
  if (search.why_not.empty()) {
    search.found = true;
    search.code = decide_all<Seen>(loop, policy, search);
  }
}

template <int Beams>
void try_readings(Search& search) {
  for_each_policy([&search](std::string const& name, auto const& policy) {
    try_loop<Readings<float, Beams, discs_kept>>(loop_on_readings<Beams>(policy, search.options), name, search);
  });
}

template <typename Seen>
void try_discs(Search& search) {
  for_each_policy(
      [&search](std::string const& name, auto const& policy) { try_loop<Seen>(loop_on_discs(policy), name, search); });
}

}  // namespace

int over_dump(Options const& options) {
  std::string const bytes = lab::read_whole(options.dump);
  Search search{options, bytes, lab::read_dump_header(options.dump, bytes)};
  int const kind_and_size = search.header.seen_kind * 1000 + search.header.seen_size;
  switch (kind_and_size) {
    case 1008: try_discs<DiscSet<float, 8>>(search); break;
    case 1016: try_discs<DiscSet<float, 16>>(search); break;
    case 3008: try_readings<8>(search); break;
    case 3016: try_readings<16>(search); break;
    case 3036: try_readings<36>(search); break;
    case 3090: try_readings<90>(search); break;
    case 3180: try_readings<180>(search); break;
    case 3360: try_readings<360>(search); break;
    default:
      throw lab::FileError(options.dump, "expected decisions on 8 or 16 discs, or on 8, 16, 36, 90, 180 or 360 ranges");
  }
  if (!search.found) {
    throw lab::FileError(options.dump, options.policy.empty()
                                           ? "was decided by no policy that replay knows, with these options: the last "
                                             "one tried " +
                                                 search.why_not
                                           : search.why_not);
  }
  return search.code;
}

}  // namespace replay
