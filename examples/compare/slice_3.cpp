#include "slices.hpp"

compare::Slice compare::slice_3() { return make_slice<3>(); }
