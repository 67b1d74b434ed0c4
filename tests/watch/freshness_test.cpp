// Freshness: each way in which a time can be wrong.
#include <limits>

#include <doctest/doctest.h>

#include "../numbers.hpp"
#include "wend/watch/freshness.hpp"

namespace {

constexpr wend::Freshness freshness{.max_age = 0.3F, .max_dt = 0.5F};
constexpr float not_a_number = std::numeric_limits<float>::quiet_NaN();
constexpr float infinity = std::numeric_limits<float>::infinity();

template <typename S>
bool stale(float dt, float age) {
  return numbers::all<S>(freshness.stale(S(dt), S(age)));
}
template <typename S>
bool fresh(float dt, float age) {
  return numbers::none<S>(freshness.stale(S(dt), S(age)));
}

}  // namespace

TEST_CASE_TEMPLATE("a tick in time with young readings is fresh, up to and with both limits", S, WEND_TEST_NUMBERS) {
  CHECK(fresh<S>(0.05F, 0.0F));
  CHECK(fresh<S>(0.05F, 0.1F));
  CHECK(fresh<S>(0.5F, 0.3F));
  CHECK(fresh<S>(std::numeric_limits<float>::denorm_min(), 0.0F));
  CHECK(fresh<S>(0.05F, -0.0F));
}

TEST_CASE_TEMPLATE("a time step that is none is stale", S, WEND_TEST_NUMBERS) {
  for (float dt : {0.0F, -0.0F, -0.05F, 0.50001F, 1.0e9F, std::numeric_limits<float>::max(), not_a_number,
                   -not_a_number, infinity, -infinity}) {
    CAPTURE(dt);
    CHECK(stale<S>(dt, 0.1F));
  }
}

TEST_CASE_TEMPLATE("readings that are too old, from the future, or of no age are stale", S, WEND_TEST_NUMBERS) {
  for (float age : {0.30001F, 10.0F, -1.0e-6F, -10.0F, not_a_number, -not_a_number, infinity, -infinity}) {
    CAPTURE(age);
    CHECK(stale<S>(0.05F, age));
  }
}

TEST_CASE("each lane is judged by itself") {
  using S = wend::lab::Pack<4>;
  float const dts[] = {0.05F, 0.0F, 0.05F, not_a_number};
  float const ages[] = {0.1F, 0.1F, 0.4F, 0.1F};
  auto const mask = freshness.stale(numbers::make<S>([&](int k) { return dts[k]; }),
                                    numbers::make<S>([&](int k) { return ages[k]; }));
  CHECK_FALSE(mask[0]);
  CHECK(mask[1]);
  CHECK(mask[2]);
  CHECK(mask[3]);
}
