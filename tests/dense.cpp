#include "dense.hpp"

#include <Eigen/Eigenvalues>
#include <Eigen/QR>

namespace dense {

Eigen::VectorXd least_squares(Eigen::MatrixXd const& a, Eigen::VectorXd const& b) {
  return a.completeOrthogonalDecomposition().solve(b);
}

Spectrum spectrum(Eigen::MatrixXd const& a) {
  Eigen::EigenSolver<Eigen::MatrixXd> const solver(a);
  return {solver.eigenvalues(), solver.eigenvectors()};
}

}  // namespace dense
