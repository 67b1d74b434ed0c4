// The fields that follow boundaries, paths and walls, dock and pass gaps: what must hold for every heading field, on
// every number.
#include <numbers>
#include <tuple>

#include "../field_checks.hpp"
#include "../subjects.hpp"
#include "wend/angle.hpp"
#include "wend/fields/along_boundary.hpp"
#include "wend/fields/along_path.hpp"
#include "wend/fields/between_walls.hpp"
#include "wend/fields/through_gap.hpp"
#include "wend/fields/to_dock.hpp"

namespace {

using subjects::entry;
using subjects::entry_with_places;

// A path through the wanderers' room that they hardly ever come to the end of.
constexpr auto route = wend::path_of(wend::straight({-1.5F, -1.0F}, {0.5F, -1.0F}),
                                     wend::arc({0.5F, -1.0F}, {0.5F, 1.0F}, 1.0F),
                                     wend::straight({0.5F, 1.0F}, {-9.0F, 1.0F}));

// Being a constant it shows that each entry can live in flash.
constexpr std::tuple list{
    entry("along_boundary", wend::along_boundary{}),
    entry_with_places("along_path", wend::along_path{route}),
    entry_with_places("onto_path", wend::onto_path{route}),
    entry("between_walls", wend::between_walls{}),
    entry_with_places("to_dock", wend::to_dock{.heading = wend::bearing(std::numbers::pi / 3.0)}),
    entry("through_gap", wend::through_gap{}),
};

}  // namespace

WEND_CHECK_FIELDS(list)
