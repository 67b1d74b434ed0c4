// potential_field's options on every number: field_checks.cpp says what is asked of them.
#include <tuple>

#include <doctest/doctest.h>

#include "../field_checks.hpp"
#include "../subjects.hpp"
#include "wend/fields/potential_field.hpp"

namespace {

constexpr std::tuple list{subjects::entry(
    "potential_field, weighted and conic",
    wend::potential_field{.repulsion = 0.0625F, .closest = 0.05F, .goal_power = 2, .conic_beyond = 1.0F})};

}  // namespace

WEND_CHECK_FIELDS(list)
