// own_guard: a signal of your own, made a guard by two thresholds. Here: the cart slows down for the ramp to the
// washing place, which begins 2 m before the goal and slants, so that it must be met square on.
#include <cstdio>

#include <wend/wend.hpp>

using namespace wend;

/// Metres by which the robot is off the line through the goal along x: to the left positive.
struct off_the_line {
  template <Number S, int N>
  S operator()(Percept<S, N> const& percept) const noexcept {
    return percept.pose.position.y() - percept.goal.y();
  }
};

/// Another field, but slower: a course may ask for a share of the speed that is allowed.
template <typename Field>
struct slowly {
  Field field;
  Parameter share;

  template <Number S, int N>
  Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    Course<S> course = evaluate(field, percept);
    course.speed_share = course.speed_share * S(share);
    return course;
  }
};

/// Straight back to the line.
struct to_the_line {
  template <Number S, int N>
  Course<S> operator()(Percept<S, N> const& percept) const noexcept {
    S const off = off_the_line{}(percept);
    return course_along(Vec2<S>(S(0.3F), -off), S(1.0F));
  }
};

// Off the line by over 20 cm: back to it, until within 5 cm. Near the goal: at 40 % of the speed.
constexpr auto crooked = either(above(off_the_line{}, 0.20F, 0.05F), below(off_the_line{}, -0.20F, -0.05F));
constexpr auto policy = guarded(
    crooked, to_the_line{}, guarded(below(goal_distance, 2.0F, 2.2F), slowly<toward_goal>{{}, 0.4F}, toward_goal{}));
constexpr Loop<decltype(policy)> loop{.policy = policy};

int main() {
  DiscSet<float, 4> const discs;
  memory_t<decltype(loop), float> memory;
  for (float const y : {0.0F, 0.1F, 0.25F, 0.1F, 0.04F}) {
    Situation<float> now;
    now.pose.position = {1.5F, y};
    now.goal = {3.0F, 0.0F};
    Command<float> const command = loop.tick(now, discs, memory);
    std::printf("%5.2f m off: course (%5.2f, %5.2f), %.2f m/s\n", static_cast<double>(y),
                static_cast<double>(command.course.direction.x()), static_cast<double>(command.course.direction.y()),
                static_cast<double>(command.body.speed));
  }
}
