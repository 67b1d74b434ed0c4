// expects: wend: two modes of one name
#include "wend/wend.hpp"

using namespace wend;

#ifdef MENDED
#define SECOND "passing"
#else
#define SECOND "going"
#endif

[[maybe_unused]] constexpr auto policy =
    modes(mode<"going">(toward_goal{}, to<SECOND>(below(clearance, 0.3F, 0.3F))),
          mode<SECOND>(past_disc{}, to<"going">(above(clearance, 0.5F, 0.5F))));
