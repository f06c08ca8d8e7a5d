#include "apparent_fit.hpp"

#include <Eigen/Cholesky>
#include <algorithm>
#include <cmath>
#include <limits>

#include "clickwise/core/statistics.hpp"

namespace clickwise::sim {

namespace {

constexpr double huber_deviations = 1.345;       // 95 % efficient for normal errors, Huber 1964
constexpr double deviation_per_median = 1.4826;  // of a normal law
constexpr int passes = 3;

// Normal equations of one block.
struct BlockSums {
  Eigen::MatrixXd matrix;
  Eigen::VectorXd right;
};

// The row's coefficients that are not zero.
using Entries = std::vector<std::pair<Eigen::Index, double>>;

void lay_entries(const ApparentRow& row, Entries& entries) {
  entries = {{share_index, row.held_n}, {offset_index, 1.0}, {friction_index, row.sign}};
  for (const auto& [knot, weight] : row.hats)
    entries.emplace_back(first_knot_index + static_cast<Eigen::Index>(knot), weight);
}

class Solver {
public:
  Solver(Eigen::Index unknowns, int blocks, bool share_free)
      : share_free_(share_free),
        sums_(static_cast<std::size_t>(blocks),
              {Eigen::MatrixXd::Zero(unknowns, unknowns), Eigen::VectorXd::Zero(unknowns)}) {}

  void add(const ApparentRow& row, double weight) {
    lay_entries(row, entries_);
    BlockSums& sums = sums_[static_cast<std::size_t>(row.block)];
    for (const auto& [i, a] : entries_) {
      sums.right[i] += weight * a * row.load_n;
      for (const auto& [j, b] : entries_) sums.matrix(i, j) += weight * a * b;
    }
  }

  // A fixed share is a column that moves to the right-hand side.
  void solve(ApparentFit& fit) {
    const Eigen::Index unknowns = sums_.front().right.size();
    const Eigen::Index skipped = share_free_ ? 0 : 1;
    Eigen::MatrixXd matrix = Eigen::MatrixXd::Zero(unknowns, unknowns);
    Eigen::VectorXd right = Eigen::VectorXd::Zero(unknowns);
    for (const BlockSums& sums : sums_) {
      matrix += sums.matrix;
      right += sums.right;
    }
    if (!share_free_) right -= matrix.col(share_index);
    const Eigen::Index n = unknowns - skipped;
    const Eigen::LDLT<Eigen::MatrixXd> solver(matrix.bottomRightCorner(n, n));
    fit.theta = Eigen::VectorXd::Ones(unknowns);
    fit.theta.tail(n) = solver.solve(right.tail(n));
    fit.covariance = Eigen::MatrixXd::Zero(unknowns, unknowns);
    fit.covariance.bottomRightCorner(n, n) = sandwich(solver, fit, n);
  }

private:
  // (A5): Liang and Zeger, Biometrika 73:13-22 (1986), blocks as their clusters.
  Eigen::MatrixXd sandwich(const Eigen::LDLT<Eigen::MatrixXd>& solver, const ApparentFit& fit,
                           Eigen::Index n) const {
    Eigen::MatrixXd spread = Eigen::MatrixXd::Zero(n, n);
    double filled = 0.0;
    for (const BlockSums& sums : sums_) {
      if (!(sums.matrix(offset_index, offset_index) > 0.0)) continue;
      filled += 1.0;
      const Eigen::VectorXd score = (sums.right - sums.matrix * fit.theta).tail(n);
      const Eigen::VectorXd moved = solver.solve(score);
      spread += moved * moved.transpose();
    }
    return spread * (filled / std::max(1.0, filled - 1.0));
  }

  bool share_free_;
  std::vector<BlockSums> sums_;
  Entries entries_;
};

double weight_of(double residual_n, double scale_n) {
  const double size = std::abs(residual_n);
  return size <= huber_deviations * scale_n ? 1.0 : huber_deviations * scale_n / size;
}

}  // namespace

double ApparentFit::residual_n(const ApparentRow& row) const {
  double said =
      theta[share_index] * row.held_n + theta[offset_index] + theta[friction_index] * row.sign;
  for (const auto& [knot, weight] : row.hats)
    said += theta[first_knot_index + static_cast<Eigen::Index>(knot)] * weight;
  return row.load_n - said;
}

ApparentFit fit_apparent(const SprungRide& ride, std::span<const double> felt_m_s2,
                         const ApparentSamples& samples, const Knots& knots, bool share_free) {
  const auto unknowns = first_knot_index + static_cast<Eigen::Index>(knots.count());
  ApparentFit fit;
  fit.blocks = samples.blocks;
  double scale_n = std::numeric_limits<double>::infinity();
  for (int pass = 0; pass < passes; ++pass) {
    Solver solver(unknowns, samples.blocks, share_free);
    std::vector<double> sizes;
    double squares = 0.0, load = 0.0, load_squares = 0.0;
    each_row(ride, felt_m_s2, samples, knots, [&](const ApparentRow& row) {
      const double residual = pass == 0 ? 0.0 : fit.residual_n(row);
      sizes.push_back(std::abs(residual));
      squares += residual * residual;
      load += row.load_n;
      load_squares += row.load_n * row.load_n;
      solver.add(row, pass < 2 ? 1.0 : weight_of(residual, scale_n));
    });
    fit.rows = sizes.size();
    if (fit.rows < 4 * static_cast<std::size_t>(unknowns)) return {};
    const double n = static_cast<double>(fit.rows);
    fit.rms_n = std::sqrt(squares / n);
    fit.load_rms_n = std::sqrt(std::max(0.0, load_squares / n - (load / n) * (load / n)));
    scale_n = std::max(1e-9, deviation_per_median * core::median(std::move(sizes)));
    solver.solve(fit);
  }
  return fit;
}

double student_quantile(double z, double degrees) {
  const double z3 = z * z * z, z5 = z3 * z * z, z7 = z5 * z * z;
  return z + (z3 + z) / (4.0 * degrees) +
         (5.0 * z5 + 16.0 * z3 + 3.0 * z) / (96.0 * degrees * degrees) +
         (3.0 * z7 + 19.0 * z5 + 17.0 * z3 - 15.0 * z) / (384.0 * degrees * degrees * degrees);
}

}  // namespace clickwise::sim
