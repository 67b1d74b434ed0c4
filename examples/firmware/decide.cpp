// One decision, from discs to a course: what is compared with the same by hand.
#include "control.hpp"

extern "C" [[gnu::flatten]] void wend_decide(Scene const* scene, DecisionMemory* memory,
                                             wend::Course<float>* course) noexcept {
  *course = wend::evaluate(decision, wend::look(scene->pose, scene->goal, scene->discs, robot_radius, 0.05F), *memory);
}
