// The decision of the policy that ships, by itself.
#include "control.hpp"

extern "C" [[gnu::flatten]] void wend_decide_example(Scene const* scene, ExampleMemory* memory,
                                                     wend::Course<float>* course) noexcept {
  auto const percept = wend::look(scene->pose, scene->goal, scene->discs, robot_radius, 0.05F);
  *course = wend::evaluate(policies::composed, percept, *memory);
}
