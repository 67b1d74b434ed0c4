// expects: wend: this is not a heading field: it cannot be called as field(percept)
#include "wend/lab/interval.hpp"
#include "wend/wend.hpp"

// Good enough for the robot; the proof asks for more.
struct leftwards {
#ifdef MENDED
  template <wend::Number S, int N>
  wend::Course<S> operator()(wend::Percept<S, N> const& percept) const noexcept {
    return {wend::left_of(percept.goal_direction), percept.goal_confidence};
  }
#else
  wend::Course<float> operator()(wend::Percept<float, 8> const& percept) const noexcept {
    return {wend::left_of(percept.goal_direction), percept.goal_confidence};
  }
#endif
};

wend::Course<wend::lab::Interval> over_a_box(wend::Percept<wend::lab::Interval, 8> const& percept) {
  wend::memory_t<leftwards, wend::lab::Interval> memory;
  return wend::evaluate(leftwards{}, percept, memory);
}
