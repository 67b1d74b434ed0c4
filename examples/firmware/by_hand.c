#include "rivals.h"

void hand_decide_out_of_line(const struct hand_scene* scene, struct hand_memory* memory, struct hand_course* course) {
  *course = hand_decide(scene, memory);
}
