/* The forms that wend is compared with, out of line, compiled as C. */
#ifndef WEND_FIRMWARE_RIVALS_H
#define WEND_FIRMWARE_RIVALS_H

#define HAND_DISCS 32
#include "../../bench/textbook.h" /* takes in by_hand.h */

#ifdef __cplusplus
extern "C" {
#endif
void hand_decide_out_of_line(const struct hand_scene* scene, struct hand_memory* memory, struct hand_course* course);
/* The same with HAND_LOOKS_TWICE. */
void hand_decide_plainly(const struct hand_scene* scene, struct hand_memory* memory, struct hand_course* course);
void textbook_decide_out_of_line(const struct hand_scene* scene, float heading, struct textbook_memory* memory,
                                 struct textbook_course* course);
#ifdef __cplusplus
}
#endif

#endif /* WEND_FIRMWARE_RIVALS_H */
