#include "slices.hpp"

compare::Slice compare::slice_1() { return make_slice<1>(); }
