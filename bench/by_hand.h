/* bench/by_hand.h - the measuring stick: the decision of bench/tick.cpp as one would write it without a library.
 *
 * Plain C, single precision, no vector type. It decides what the composed policy decides, to the last bit: pass beside
 * the nearest disc while the clearance is under 0.30 m (until it is over 0.50 m), on the side nearer the goal, chosen
 * at entry, and on the nose's side when another disc becomes the nearest; otherwise away from the disc at 0.5 m of
 * clearance, to the goal at 1.2 m, and blended in between. */
#ifndef WEND_BENCH_BY_HAND_H
#define WEND_BENCH_BY_HAND_H

#include <math.h>
#include <stdbool.h>

#ifndef HAND_DISCS
#define HAND_DISCS 8 /* room for so many */
#endif

/* Metres; one frame. */
struct hand_disc {
  float x, y, radius;
};
struct hand_scene {
  float x, y;
  float heading_x, heading_y; /* unit */
  float goal_x, goal_y;
  float robot_radius;
  int disc_count;
  struct hand_disc discs[HAND_DISCS];
};

struct hand_memory {
  float away_x, away_y; /* of the decision before; (0, 0) before the first beside a disc */
  bool passing;
  bool disc_on_right;
};

struct hand_course {
  float x, y;
  float confidence;
  float speed_share; /* of the speed that is allowed: this decision wants all of it */
};

static inline struct hand_course hand_decide(const struct hand_scene* scene, struct hand_memory* memory) {
  const float far_away = 1.0e6F;    /* as if there were none */
  const float no_length = 1.1e-19F; /* nor any direction: its square loses digits */
  const float enter = 0.30F;
  const float leave = 0.50F;
  const float low = 0.5F;
  const float high = 1.2F;
  struct hand_course course = {0.0F, 0.0F, 0.0F, 1.0F};

  float least_gap = far_away;
  float away_x = 0.0F;
  float away_y = 0.0F;
  float away_length = 0.0F;
  const struct hand_disc* const end = scene->discs + scene->disc_count;
#ifndef HAND_LOOKS_TWICE /* what was worked out for the nearest disc is kept */
  for (const struct hand_disc* disc = scene->discs; disc != end; ++disc) {
    const float dx = scene->x - disc->x;
    const float dy = scene->y - disc->y;
    const float distance = sqrtf(dx * dx + dy * dy);
    const float gap = distance - disc->radius;
    if (gap < least_gap) {
      least_gap = gap;
      away_x = dx;
      away_y = dy;
      away_length = distance;
    }
  }
#else /* plainly: first which disc is nearest, then the way to it; slower on most machines */
  const struct hand_disc* nearest = 0;
  for (const struct hand_disc* disc = scene->discs; disc != end; ++disc) {
    const float dx = scene->x - disc->x;
    const float dy = scene->y - disc->y;
    const float gap = sqrtf(dx * dx + dy * dy) - disc->radius;
    if (gap < least_gap) {
      least_gap = gap;
      nearest = disc;
    }
  }
  if (nearest) {
    away_x = scene->x - nearest->x;
    away_y = scene->y - nearest->y;
    away_length = sqrtf(away_x * away_x + away_y * away_y);
  }
#endif
  const float clearance = least_gap - scene->robot_radius;

  const bool some_disc = least_gap < 0.5F * far_away && away_length > no_length;
  if (some_disc) {
    const float scale = 1.0F / away_length;
    away_x *= scale;
    away_y *= scale;
  }

  float goal_x = scene->goal_x - scene->x;
  float goal_y = scene->goal_y - scene->y;
  const float goal_distance = sqrtf(goal_x * goal_x + goal_y * goal_y);
  const bool some_goal = goal_distance > no_length && goal_distance < far_away;
  if (some_goal) {
    const float scale = 1.0F / goal_distance;
    goal_x *= scale;
    goal_y *= scale;
  } else { /* it may be no number */
    goal_x = 0.0F;
    goal_y = 0.0F;
  }

  const bool passing = clearance < enter || (memory->passing && !(clearance > leave));
  if (passing != memory->passing) {
    memory->passing = passing;
    memory->away_x = 0.0F;
    memory->away_y = 0.0F;
  }

  if (passing) {
    if (some_disc) {
      if (memory->away_x == 0.0F && memory->away_y == 0.0F) {
        memory->disc_on_right = away_x * goal_y - away_y * goal_x <= 0.0F;
      } else if (memory->away_x * away_x + memory->away_y * away_y < 0.5F) { /* more than 60 degrees: another disc */
        memory->disc_on_right = away_x * scene->heading_y - away_y * scene->heading_x <= 0.0F;
      }
      memory->away_x = away_x;
      memory->away_y = away_y;
      course.x = memory->disc_on_right ? away_y : -away_y;
      course.y = memory->disc_on_right ? -away_x : away_x;
      course.confidence = 1.0F;
    }
    return course;
  }

  float weight = (clearance - low) * (1.0F / (high - low));
  weight = weight > 0.0F ? weight : 0.0F;
  weight = weight < 1.0F ? weight : 1.0F;
  float x = weight * goal_x;
  float y = weight * goal_y;
  if (some_disc) {
    const float of_away = 1.0F - weight;
    x = of_away * away_x + x;
    y = of_away * away_y + y;
  }
  const float length = sqrtf(x * x + y * y);
  if (length > no_length) {
    const float scale = 1.0F / length;
    course.x = x * scale;
    course.y = y * scale;
    course.confidence = length < 1.0F ? length : 1.0F;
  }
  return course;
}

#endif /* WEND_BENCH_BY_HAND_H */
