// expects: wend: below needs the signal that is compared
#include "wend/wend.hpp"

[[maybe_unused]] constexpr auto policy = wend::guarded(
#ifdef MENDED
    wend::below(wend::clearance, 0.30F, 0.50F),
#else
    wend::below(0.30F, 0.50F),
#endif
    wend::past_disc{}, wend::toward_goal{});
