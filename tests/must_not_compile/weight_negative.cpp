// expects: wend_share_needs_a_weight_of_zero_or_more
#include "wend/wend.hpp"

#ifdef MENDED
constexpr wend::Parameter weight = 1.0F;
#else
constexpr wend::Parameter weight = -1.0F;
#endif

[[maybe_unused]] constexpr auto policy =
    wend::blend(wend::share(2.0F, wend::toward_goal{}), wend::share(weight, wend::away_from_discs{}));
