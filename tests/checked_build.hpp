// Whether this build is many times slower than what people run: checked by a sanitizer, or not optimised. Tests that
// count over many runs take fewer then.
#pragma once

#if defined(__has_feature)
#if __has_feature(address_sanitizer) || __has_feature(thread_sanitizer)
#define WEND_TEST_CHECKED
#endif
#endif
#if defined(__SANITIZE_ADDRESS__) || defined(__SANITIZE_THREAD__) || defined(WEND_TEST_CHECKED) || \
    !defined(__OPTIMIZE__)
inline constexpr bool is_slow_build = true;
#else
inline constexpr bool is_slow_build = false;
#endif
#undef WEND_TEST_CHECKED
