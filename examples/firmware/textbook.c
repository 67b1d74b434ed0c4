#include "rivals.h"

void textbook_decide_out_of_line(const struct hand_scene* scene, float heading, struct textbook_memory* memory,
                                 struct textbook_course* course) {
  *course = textbook_decide(scene, heading, memory);
}
