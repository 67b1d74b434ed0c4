// tests/field_checks.hpp - what must hold for every heading field. A test file with a list of fields writes
// WEND_CHECK_FIELDS(list) once, and has all of it checked on every number.
#pragma once

#include <vector>

#include <doctest/doctest.h>

#include "numbers.hpp"
#include "scenes.hpp"
#include "subjects.hpp"

namespace field_checks {

inline constexpr int ticks = 400;

/// Whether a course keeps its promise in every lane.
template <wend::Number S>
[[nodiscard]] bool all_sound(wend::Course<S> const& course);

/// What a field answers and remembers over a run, in one lane, as bits.
using Trace = std::vector<std::vector<std::uint64_t>>;

/// Runs a field for as many wanderers as S has lanes, the first with the given seed, and returns the trace of each.
template <wend::Number S>
[[nodiscard]] std::vector<Trace> traces(subjects::Subject<S> const& subject, std::uint32_t seed);

// Each checks by itself, with doctest's CHECK.
template <wend::Number S>
void give_sound_courses(subjects::Subjects<S> const& all);
template <wend::Number S>
void keep_their_promise_in_odd_scenes(subjects::Subjects<S> const& all);
template <wend::Number S>
void run_without_discs(subjects::Subjects<S> const& all);
template <wend::Number S>
void start_out_with_nothing(subjects::Subjects<S> const& all);
void agree_lane_by_lane(subjects::Subjects<wend::lab::Pack<8>> const& lanes, subjects::Subjects<float> const& alone);
void turn_and_shift_with_the_scene(subjects::Subjects<double> const& all);
void go_on_from_a_copied_memory(subjects::Subjects<float> const& all);
template <typename I>
void enclose_every_point(subjects::AllEnclosed<I> const& all);
void have_the_right_slopes(subjects::AllSloped const& all);

}  // namespace field_checks

#define WEND_CHECK_FIELDS(list)                                                                                     \
  TEST_CASE_TEMPLATE("every field gives a unit direction with a confidence in (0, 1], or no opinion", S,            \
                     WEND_TEST_NUMBERS) {                                                                           \
    field_checks::give_sound_courses<S>(subjects::on<S>(list));                                                     \
  }                                                                                                                 \
  TEST_CASE_TEMPLATE("no scene and no number, however odd, brings a field off its promise", S, WEND_TEST_NUMBERS) { \
    field_checks::keep_their_promise_in_odd_scenes<S>(subjects::on<S>(list));                                       \
  }                                                                                                                 \
  TEST_CASE_TEMPLATE("every field runs without any disc, and on the goal", S, WEND_TEST_NUMBERS) {                  \
    field_checks::run_without_discs<S>(subjects::on<S>(list));                                                      \
  }                                                                                                                 \
  TEST_CASE_TEMPLATE("a memory starts out all zero and no, but for the distances", S, WEND_TEST_NUMBERS) {          \
    field_checks::start_out_with_nothing<S>(subjects::on<S>(list));                                                 \
  }                                                                                                                 \
  TEST_CASE("each lane of a pack does and remembers what a float alone would") {                                    \
    field_checks::agree_lane_by_lane(subjects::on<wend::lab::Pack<8>>(list), subjects::on<float>(list));            \
  }                                                                                                                 \
  TEST_CASE("the course turns and shifts with the scene") {                                                         \
    field_checks::turn_and_shift_with_the_scene(subjects::on<double>(list));                                        \
  }                                                                                                                 \
  TEST_CASE("a copied memory goes on as the original does") {                                                       \
    field_checks::go_on_from_a_copied_memory(subjects::on<float>(list));                                            \
  }                                                                                                                 \
  TEST_CASE_TEMPLATE("a field's course and memory on a box enclose those of every point in it", I,                  \
                     wend::lab::Interval, wend::lab::FloatInterval) {                                               \
    field_checks::enclose_every_point<I>(subjects::enclosed<I>(list));                                              \
  }                                                                                                                 \
  TEST_CASE("a field's derivatives are those of Eigen's AutoDiffScalar and of central differences") {               \
    field_checks::have_the_right_slopes(subjects::sloped(list));                                                    \
  }
