// Any bytes as a dump of a decision log: refused with a reason, or read up to the damage; and what was read can be
// decided again.
#include <cstddef>
#include <cstdint>
#include <string>
#include <string_view>

#include "../../examples/policies.hpp"
#include "target.hpp"
#include "wend/lab/csv.hpp"
#include "wend/lab/dump.hpp"
#include "wend/watch/log.hpp"
#include "wend/wend.hpp"

namespace {

using namespace wend;

constexpr Loop<decltype(policies::two_thresholds)> loop{.policy = policies::two_thresholds};
using Seen = DiscSet<float, 4>;

// A sound dump of three decisions, which the input then damages: sound headers are hard to come by otherwise.
std::string sound_dump() {
  DecisionLog<decltype(loop), Seen, 4> log;
  memory_t<decltype(loop), float> memory;
  for (int i = 0; i < 3; ++i) {
    Situation<float> now;
    now.goal = {3.0F, 0.5F * static_cast<float>(i)};
    Seen discs;
    discs.add({{1.0F, 0.1F}, 0.3F});
    static_cast<void>(log.tick(loop, now, discs, memory));
  }
  std::string bytes;
  log.dump(loop, [&bytes](std::byte byte) { bytes += static_cast<char>(byte); });
  return bytes;
}

}  // namespace

extern "C" int LLVMFuzzerTestOneInput(std::uint8_t const* data, std::size_t size) {
  std::string bytes;
  if (size > 0 && (data[0] & 1U) != 0) {  // pairs of a place and a byte to put there
    static std::string const sound = sound_dump();
    bytes = sound;
    for (std::size_t i = 1; i + 2 < size; i += 3) {
      std::size_t const place = (static_cast<std::size_t>(data[i]) << 8U | data[i + 1]) % bytes.size();
      bytes[place] = static_cast<char>(data[i + 2]);
    }
  } else {
    for (std::size_t i = 1; i < size; ++i) {
      bytes += static_cast<char>(data[i]);
    }
  }
  try {
    auto const dump = lab::read_dump<Seen>("f", bytes, loop);
    fuzz::hold(dump.decisions.size() + dump.overwritten.size() <= dump.header.records, "no more records than it says");
    fuzz::hold(!dump.damage.empty() || dump.decisions.size() + dump.overwritten.size() == dump.header.records,
               "what is missing is told");
    for (auto const& decision : dump.decisions) {
      auto memory = decision.before;
      static_cast<void>(loop.tick(decision.now, decision.seen, memory));
    }
  } catch (lab::FileError const& error) {
    fuzz::hold(std::string_view(error.what()).size() > 3, "a refusal says why");
  }
  return 0;
}
