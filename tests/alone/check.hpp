// tests/alone/check.hpp - what a program without a test framework checks with.
#pragma once

#include <cstdio>

namespace alone {

inline int failures = 0;

inline void check(bool holds, char const* what) {
  std::printf("%s: %s\n", holds ? "ok" : "FAILED", what);
  failures += holds ? 0 : 1;
}

}  // namespace alone
