// expects: wend: a transition leads to a mode that is not there
#include "wend/wend.hpp"

using namespace wend;

#ifdef MENDED
#define TARGET "passing"
#else
#define TARGET "pasing"
#endif

[[maybe_unused]] constexpr auto policy =
    modes(mode<"going">(toward_goal{}, to<TARGET>(below(clearance, 0.3F, 0.3F))),
          mode<"passing">(past_disc{}, to<"going">(above(clearance, 0.5F, 0.5F))));
