#include "slices.hpp"

compare::Slice compare::slice_0() { return make_slice<0>(); }
