/* bench/textbook.h - the same decision in the form that textbooks of the trade print it (common practice, no source):
 * every direction is an angle. The bearing of the nearest disc by atan2, plus pi to go away from it, plus or minus pi/2
 * to pass beside it; angles blended by summing their cosines and sines. */
#ifndef WEND_BENCH_TEXTBOOK_H
#define WEND_BENCH_TEXTBOOK_H

#include "by_hand.h"

struct textbook_memory {
  float to_disc; /* radians, of the decision before */
  bool passing;
  bool committed;
  bool disc_on_right;
};

struct textbook_course {
  float angle; /* radians, counter-clockwise */
  float confidence;
};

/* The same angle in (-pi, pi], by the textbooks' identity. */
static inline float textbook_wrapped(float angle) { return atan2f(sinf(angle), cosf(angle)); }

static inline struct textbook_course textbook_decide(const struct hand_scene* scene, float heading,
                                                     struct textbook_memory* memory) {
  const float pi = 3.14159265F;
  const float far_away = 1.0e6F;
  struct textbook_course course = {0.0F, 0.0F};

  float least_gap = far_away;
  const struct hand_disc* nearest = 0;
  for (int i = 0; i < scene->disc_count; ++i) {
    const struct hand_disc* disc = &scene->discs[i];
    const float dx = disc->x - scene->x;
    const float dy = disc->y - scene->y;
    const float gap = sqrtf(dx * dx + dy * dy) - disc->radius;
    if (gap < least_gap) {
      least_gap = gap;
      nearest = disc;
    }
  }
  const float clearance = least_gap - scene->robot_radius;
  const float to_disc = nearest ? atan2f(nearest->y - scene->y, nearest->x - scene->x) : 0.0F;
  const float to_goal = atan2f(scene->goal_y - scene->y, scene->goal_x - scene->x);

  const bool passing = clearance < 0.30F || (memory->passing && !(clearance > 0.50F));
  if (passing != memory->passing) {
    memory->passing = passing;
    memory->committed = false;
    memory->disc_on_right = false;
  }

  if (passing) {
    if (!memory->committed) { /* a disc to the right of the goal's direction is passed leaving it on the right */
      memory->disc_on_right = textbook_wrapped(to_goal - to_disc) >= 0.0F;
    } else if (fabsf(textbook_wrapped(to_disc - memory->to_disc)) > pi / 3.0F) { /* another disc */
      memory->disc_on_right = textbook_wrapped(heading - to_disc) >= 0.0F;
    }
    memory->committed = true;
    memory->to_disc = to_disc;
    course.angle = textbook_wrapped(to_disc + (memory->disc_on_right ? 0.5F * pi : -0.5F * pi));
    course.confidence = 1.0F;
    return course;
  }

  float weight = (clearance - 0.5F) / (1.2F - 0.5F);
  weight = weight > 0.0F ? weight : 0.0F;
  weight = weight < 1.0F ? weight : 1.0F;
  const float of_away = nearest ? 1.0F - weight : 0.0F;
  const float away = to_disc + pi;
  const float c = of_away * cosf(away) + weight * cosf(to_goal);
  const float s = of_away * sinf(away) + weight * sinf(to_goal);
  course.angle = atan2f(s, c);
  course.confidence = sqrtf(c * c + s * s);
  return course;
}

#endif /* WEND_BENCH_TEXTBOOK_H */
