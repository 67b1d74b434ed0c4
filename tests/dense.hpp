// Answers of Eigen's decompositions to hold ours against. Built once, in dense.cpp: they take longer to compile than
// most tests.
#pragma once

#include <Eigen/Core>

namespace dense {

// The x that comes nearest to a x = b, the shortest where there are several.
[[nodiscard]] Eigen::VectorXd least_squares(Eigen::MatrixXd const& a, Eigen::VectorXd const& b);

struct Spectrum {
  Eigen::VectorXcd values;
  Eigen::MatrixXcd vectors;  // a column for each value
};
[[nodiscard]] Spectrum spectrum(Eigen::MatrixXd const& a);

}  // namespace dense
