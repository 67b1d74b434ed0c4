// wend/config.hpp - the hooks a project may set before it includes anything else of wend.
#pragma once

/// WEND_ASSERT(condition) guards promises between the parts of the library and its caller that no input from outside
/// can break (a capacity, an index). It costs nothing unless you define it; define it to a function of your own, for
/// example one that blinks a lamp and halts. Readings, poses and times are never asserted: they get a `Status`.
#ifndef WEND_ASSERT
#define WEND_ASSERT(condition) static_cast<void>(0)
#endif
