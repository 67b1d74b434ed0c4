// expects: wend: modes needs two modes at least
#include "wend/wend.hpp"

using namespace wend;

#ifdef MENDED
[[maybe_unused]] constexpr auto policy =
    modes(mode<"going">(toward_goal{}, to<"passing">(below(clearance, 0.3F, 0.3F))),
          mode<"passing">(past_disc{}, to<"going">(above(clearance, 0.5F, 0.5F))));
#else
[[maybe_unused]] constexpr auto policy = modes(mode<"going">(toward_goal{}));
#endif
