#include "slices.hpp"

compare::Slice compare::slice_2() { return make_slice<2>(); }
