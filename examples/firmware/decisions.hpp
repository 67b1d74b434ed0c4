// One decision in three forms, side by side: composed of the library's parts, by hand in C, and as textbooks have it.
#pragma once

/// Takes the same decisions in all forms, and prints what they cost in instructions and stack where the machine counts.
/// False, with a line that says where, when they disagree: by hand in any bit, the textbook form by more than rounding.
bool compare_decisions() noexcept;
