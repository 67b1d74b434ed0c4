// expects: wend: DiscSet<S, Capacity> needs room for one disc at least
#include "wend/wend.hpp"

#ifdef MENDED
constexpr int capacity = 8;
#else
constexpr int capacity = 0;
#endif

wend::DiscSet<float, capacity> discs;
