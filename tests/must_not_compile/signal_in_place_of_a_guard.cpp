// expects: wend: this arbiter needs a guard, and was given something that does not answer yes or no
#include "wend/wend.hpp"

#ifdef MENDED
constexpr auto near = wend::below(wend::clearance, 0.3F, 0.5F);
#else
constexpr auto near = wend::clearance;
#endif

[[maybe_unused]] auto const policy = wend::guarded(near, wend::past_disc{}, wend::toward_goal{});
