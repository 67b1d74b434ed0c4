// own_field: a heading field of your own is a struct with one template. It runs on the robot and on the laptop's
// numbers as it is. Here: keep to the middle of an aisle that runs along x, beside the shelves of a mushroom cellar.
#include <cstdio>

#include <wend/lab/interval.hpp>
#include <wend/wend.hpp>

using namespace wend;

/// Along the aisle y = middle, toward +x, coming back to it at an angle that grows with the distance: 45 degrees at
/// `reach` metres off.
struct along_aisle {
  Parameter middle = 0.0F;  ///< metres
  Parameter reach = 1.0F;   ///< metres, over 0

  template <Number S, int N>
  Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    S const off = (percept.pose.position.y() - S(middle)) / S(reach);
    return course_along(Vec2<S>(S(1.0F), -off), S(1.0F));
  }
};

// It composes with all others.
constexpr auto policy = guarded(below(clearance, 0.30F, 0.50F), past_disc{}, along_aisle{});

template <Number S>
Course<S> course_at(S const& y) {
  DiscSet<S, 4> const discs;  // nothing in the way
  Pose<S> pose;
  pose.position = {S(0.0F), y};
  memory_t<decltype(policy), S> memory;
  return evaluate(policy, look(pose, Vec2<S>(S(5.0F), S(0.0F)), discs, S(0.2F), S(0.05F)), memory);
}

int main() {
  Course<float> const course = course_at(0.75F);
  std::printf("0.75 m to the left: course (%.2f, %.2f)\n", static_cast<double>(course.direction.x()),
              static_cast<double>(course.direction.y()));

  // The same field on an interval: what it does for every y from 0.5 m to 1 m.
  Course<lab::Interval> const all = course_at(lab::Interval(0.5, 1.0));
  std::printf("anywhere from 0.5 m to 1 m: to the right by %.3f to %.3f\n", -all.direction.y().high(),
              -all.direction.y().low());
}
