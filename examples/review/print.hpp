// A review as a text.
#pragma once

#include <wend/lab/review.hpp>

namespace review {

/// The tables, on the output.
void print(wend::lab::Review const& review);

/// What has to be said under whatever advises.
inline constexpr char const* cautions =
    "Runs are simulations: evidence, not proof; proofs hold for what they assume; neither is a safety function.\n"
    "A machine that can hurt someone needs protective devices and people qualified for them; local codes come\n"
    "first.\n";

}  // namespace review
