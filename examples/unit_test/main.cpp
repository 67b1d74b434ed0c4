// unit_test: a controller's own tests, here with doctest; any framework will do, since an expectation is true or false
// and says why. The cart of the mushroom cellar, told where the pillars are.
#define DOCTEST_CONFIG_IMPLEMENT_WITH_MAIN
#include <doctest/doctest.h>

#include <wend/lab/expect.hpp>
#include <wend/wend.hpp>

#include "../policies.hpp"
#include "../cellar.hpp"

using namespace wend;

namespace {

constexpr Loop<decltype(policies::composed)> loop{.policy = policies::composed};
constexpr Loop<toward_goal> blunt{.policy = {}};

}  // namespace

TEST_CASE("the cart comes to the washing place") {
  auto const arrives = lab::expect_arrives(loop, cellar::cart(), cellar::world(), cellar::trip());
  CHECK_MESSAGE(arrives, arrives.why);
}

TEST_CASE("the cart keeps 10 cm clear of every pillar") {
  auto const clear = lab::expect_keeps_clear(loop, cellar::cart(), cellar::world(), cellar::trip(), 0.10);
  CHECK_MESSAGE(clear, clear.why);
}

TEST_CASE("no guard changes its mind within 0.3 s") {
  auto const calm = lab::expect_no_chatter(loop, cellar::cart(), cellar::world(), cellar::trip(), 0.3);
  CHECK_MESSAGE(calm, calm.why);
}

TEST_CASE("a cart that only knows its goal gets stuck, and the scene that shows it is small") {
  auto const stuck = lab::expect_arrives(blunt, cellar::cart(), cellar::world(), cellar::trip());
  CHECK_FALSE(stuck);
  CHECK(stuck.scene.world.discs.size() == 1);
  MESSAGE(stuck.why);
}
