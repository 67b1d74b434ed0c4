// The fields for discs that move, and those that go by sectors, by dynamics and at random: what must hold for every
// heading field, on every number.
#include <cstddef>
#include <tuple>
#include <type_traits>

#include "../field_checks.hpp"
#include "../subjects.hpp"
#include "wend/fields/attractor_dynamics.hpp"
#include "wend/fields/roam.hpp"
#include "wend/fields/sector_histogram.hpp"
#include "wend/fields/shared_avoidance.hpp"
#include "wend/fields/velocity_obstacle.hpp"

namespace {

using subjects::entry;

// Being a constant it shows that each entry can live in flash.
constexpr std::tuple list{
    entry("velocity_obstacle", wend::velocity_obstacle{}),
    entry("shared_avoidance", wend::shared_avoidance{}),
    entry("sector_histogram", wend::sector_histogram<36>{}),
    entry("attractor_dynamics", wend::attractor_dynamics{}),
    entry("roam", wend::roam{}),
    entry("roam, about the nose", wend::roam{.seed = 7.0F, .about_nose = true}),
};

// What a machine has to keep in RAM.
template <typename Field>
constexpr std::size_t bytes = sizeof(wend::memory_t<Field, float>);
template <typename Field>
constexpr bool takes_no_byte = std::is_empty_v<wend::memory_t<Field, float>>;
static_assert(takes_no_byte<wend::velocity_obstacle> && takes_no_byte<wend::sector_histogram<36>>);
static_assert(takes_no_byte<wend::attractor_dynamics>);
static_assert(bytes<wend::shared_avoidance> == 8, "a velocity of two floats");
static_assert(bytes<wend::roam> == 16, "the offset, and three whole numbers of the generator");

}  // namespace

WEND_CHECK_FIELDS(list)
