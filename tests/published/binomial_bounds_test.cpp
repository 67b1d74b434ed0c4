// Bounds on a probability against R 4.2.2: binom.test (Clopper and Pearson 1934, two-sided and with alternative "less")
// and prop.test(correct = FALSE) (Wilson 1927), 95 %; the table of tests/data/SOURCES.md.
#include <array>
#include <cmath>
#include <cstdint>

#include <doctest/doctest.h>

#include "wend/lab/statistics.hpp"

namespace {

using namespace wend;

struct Row {
  std::uint64_t failures;
  std::uint64_t runs;
  double low;
  double high;
  double upper;
  double wilson_low;
  double wilson_high;
};

constexpr std::array<Row, 5> table{{
    {0, 1000, 0.0, 0.00368208389687, 0.0029912495451, 0.0, 0.00382675848556},
    {1, 1000, 2.53174874913e-05, 0.00555892427983, 0.0047349935755, 0.000176546370626, 0.00564255859796},
    {0, 20000, 0.0, 0.000184426963962, 0.000149775396223, 0.0, 0.000192036056105},
    {3, 500, 0.00123905754354, 0.0174336737259, 0.0154337348768, 0.00204259627196, 0.0174902521041},
    {17, 200, 0.0502959186303, 0.13260516583, 0.124771133192, 0.0537457501775, 0.131895870716},
}};

bool within(double a, double b, double most) { return std::abs(a - b) <= most; }

}  // namespace

TEST_CASE("bounds on a probability are R's, to 1e-9") {
  for (Row const& row : table) {
    CAPTURE(row.failures);
    CAPTURE(row.runs);
    lab::Bounds const exact = lab::clopper_pearson(row.failures, row.runs);
    CHECK(within(exact.low, row.low, 1e-9));
    CHECK(within(exact.high, row.high, 1e-9));
    CHECK(within(lab::upper_bound_on_probability(row.failures, row.runs), row.upper, 1e-9));
    lab::Bounds const wilson = lab::wilson(row.failures, row.runs);
    CHECK(within(wilson.low, row.wilson_low, 1e-9));
    CHECK(within(wilson.high, row.wilson_high, 1e-9));
    // The table has twelve digits, and small bounds have few of them before 1e-9: so relatively too.
    CHECK(within(exact.high / row.high, 1.0, 1e-11));
    CHECK(within(wilson.high / row.wilson_high, 1.0, 1e-11));
    if (row.failures > 0) {
      CHECK(within(exact.low / row.low, 1.0, 1e-11));
      CHECK(within(wilson.low / row.wilson_low, 1.0, 1e-11));
    }
  }
}

// Seen from the successes, the same intervals turned around.
TEST_CASE("bounds on successes mirror those on failures") {
  for (Row const& row : table) {
    lab::Bounds const exact = lab::clopper_pearson(row.runs - row.failures, row.runs);
    CHECK(within(exact.high, 1.0 - row.low, 1e-9));
    CHECK(within(exact.low, 1.0 - row.high, 1e-9));
    lab::Bounds const wilson = lab::wilson(row.runs - row.failures, row.runs);
    CHECK(within(wilson.high, 1.0 - row.wilson_low, 1e-9));
    CHECK(within(wilson.low, 1.0 - row.wilson_high, 1e-9));
  }
}
