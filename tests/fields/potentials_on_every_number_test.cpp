// Fields that follow a flow or a landscape to the goal, on every number: field_checks.cpp says what is asked of them.
#include <tuple>

#include <doctest/doctest.h>

#include "../field_checks.hpp"
#include "../subjects.hpp"
#include "wend/fields/harmonic_flow.hpp"
#include "wend/fields/navigation_function.hpp"

namespace {

constexpr std::tuple list{
    subjects::entry("harmonic_flow", wend::harmonic_flow{.margin = 0.0625F}),
    subjects::entry_with_places("navigation_function",
                                wend::navigation_function{.radius = 4.0F, .k = 3, .margin = 0.0625F})};

}  // namespace

WEND_CHECK_FIELDS(list)
