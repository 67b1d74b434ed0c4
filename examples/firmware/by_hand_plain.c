#define HAND_LOOKS_TWICE
#include "rivals.h"

void hand_decide_plainly(const struct hand_scene* scene, struct hand_memory* memory, struct hand_course* course) {
  *course = hand_decide(scene, memory);
}
