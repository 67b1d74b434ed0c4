// The arbiters of the catalogue on every number: field_checks.cpp says what is asked of them.
#include <tuple>

#include <doctest/doctest.h>

#include "../field_checks.hpp"
#include "../field_list.hpp"
#include "wend/arbiters/kept_clear.hpp"
#include "wend/arbiters/modes.hpp"
#include "wend/arbiters/null_space.hpp"
#include "wend/arbiters/sliding.hpp"
#include "wend/arbiters/vote.hpp"

namespace {

using field_list::shy;
using subjects::entry;

constexpr auto three_modes = wend::modes(
    wend::mode<"going">(wend::toward_goal{}, wend::to<"passing">(wend::below(wend::clearance, 0.3F, 0.3F)),
                        wend::to<"leaving">(wend::held(wend::above(wend::goal_distance, 1.8F, 1.5F), 0.1F))),
    wend::mode<"passing">(wend::past_disc{}, wend::to<"leaving">(wend::below(wend::clearance, 0.1F, 0.1F)),
                          wend::to<"going">(wend::above(wend::clearance, 0.5F, 0.5F))),
    wend::mode<"leaving">(shy{}, wend::to<"going">(wend::held(wend::above(wend::clearance, 0.4F, 0.4F), 0.2F))));

constexpr std::tuple list{
    entry("modes", three_modes),
    entry("modes in a blend",
          wend::blend(wend::ramp(wend::clearance, 0.1F, 0.4F), wend::away_from_discs{}, three_modes)),
    entry("kept_clear", wend::kept_clear(wend::toward_goal{}, 0.6F), 1.0e-9),
    entry("kept_clear of a memory", wend::kept_clear(wend::past_disc{}, 0.5F, 4.0F, 0.1F), 1.0e-9),
    entry("null_space", wend::null_space(wend::only_when(field_list::near_a_disc, wend::away_from_discs{}),
                                         wend::past_disc{}, wend::toward_goal{})),
    entry("sliding", wend::sliding(0.35F, 0.1F, wend::away_from_discs{}, wend::past_disc{})),
    entry("vote", wend::vote<12>(wend::share(1.0F, wend::toward_goal{}), wend::share(2.0F, wend::past_disc{}))),
};

}  // namespace

WEND_CHECK_FIELDS(list)
