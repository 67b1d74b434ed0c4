// From any readings of any ranger, mounted anyhow: every disc is finite, none is lost, and readings are counted.
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>
#include <numbers>
#include <span>

#include "target.hpp"
#include "wend/sensing/ring.hpp"

namespace {

constexpr int beams = 24;

void check(wend::Ring<beams> const& ring, std::array<float, beams> const& ranges, bool sound_mounting) {
  wend::DiscSet<float, 6> discs;
  wend::RingCount const count = ring.discs(std::span<float const, beams>(ranges), discs);
  int const all = count.echoes + count.no_echo + count.not_a_number + count.infinite + count.zero + count.negative +
                  count.too_near + count.too_far;
  fuzz::hold(all == beams, "every reading is counted once");
  fuzz::hold(count.echoes == 0 || discs.size() > 0, "an echo is not lost");
  fuzz::hold(!discs.rejected() || !sound_mounting, "a sound mounting makes discs that are discs");
  for (auto const& disc : discs) {
    fuzz::hold(std::isfinite(disc.centre.x()) && std::isfinite(disc.centre.y()), "a disc's centre is finite");
    fuzz::hold(std::isfinite(disc.radius) && disc.radius >= 0.0F, "a disc's radius is one");
  }
}

}  // namespace

extern "C" int LLVMFuzzerTestOneInput(std::uint8_t const* data, std::size_t size) {
  fuzz::Bytes bytes(data, size);
  wend::Ring<beams> ring{.directions = wend::even_bearings<beams>(0.0, 2.0 * std::numbers::pi / beams),
                         .min_range = 0.05F,
                         .max_range = 6.0F,
                         .noise = 0.02F};
  auto const choice = bytes.next<std::uint8_t>();
  if ((choice & 1U) != 0) {  // a ranger that somebody described with anything at all
    bytes.take(ring.min_range);
    bytes.take(ring.max_range);
    bytes.take(ring.noise);
    bytes.take(ring.no_echo);
    bytes.take(ring.widest_gap);
    bytes.take(ring.widest_disc);
    bytes.take(ring.largest_circle);
    bytes.take(ring.kept_clear);
  }
  if ((choice & 2U) != 0) {
    bytes.take(ring.mounting.x);
    bytes.take(ring.mounting.y);
    bytes.take(ring.mounting.turn.x);
    bytes.take(ring.mounting.turn.y);
  }
  std::array<float, beams> ranges;
  for (float& range : ranges) {
    if ((choice & 4U) != 0) {  // millimetres in 16 bits: readings that may be ones
      range = 0.001F * static_cast<float>(bytes.next<std::uint16_t>());
    } else {
      bytes.take(range);
    }
  }
  check(ring, ranges, (choice & 2U) == 0);
  return 0;
}
