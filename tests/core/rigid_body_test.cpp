#include "clickwise/core/rigid_body.hpp"

#include <catch2/catch.hpp>

using namespace clickwise;
using Eigen::Vector3d;

// Rigid-body kinematics with numbers (check-values 8b).
TEST_CASE("acceleration is carried to another point of a turning body", "[core]") {
  const Vector3d r(0.1, 0.2, 0.3);
  const Vector3d at = Vector3d(1, 2, 3) + core::transport({{0, 0, 10}, {0, 5, 0}}, r);
  CHECK((at - Vector3d(-7.5, -18.0, 2.5)).norm() < 1e-12);
  CHECK((core::transport({{0, 0, 0}, {0, 5, 0}}, r) - Vector3d(1.5, 0.0, -0.5)).norm() < 1e-12);
  CHECK((core::transport({{0, 0, 10}, {0, 0, 0}}, r) - Vector3d(-10, -20, 0)).norm() < 1e-12);
  CHECK(core::transport({{1, 2, 3}, {0, 0, 0}}, r).norm() < 1e-12);
}

// A bead running out along a spoke: the sum is the second derivative of its path.
TEST_CASE("a point that moves inside a turning frame has its Coriolis part", "[core]") {
  const double w = 2.0, speed = 3.0, step = 1e-4;
  const auto path = [&](double t) {
    const double radius = 0.5 + speed * t;
    return Vector3d(radius * std::cos(w * t), radius * std::sin(w * t), 0.0);
  };
  const Vector3d numeric = (path(step) - 2.0 * path(0.0) + path(-step)) / (step * step);
  const Vector3d found =
      core::transport({{0, 0, w}, {0, 0, 0}}, {0.5, 0, 0}, {speed, 0, 0}, Vector3d::Zero());
  CHECK((numeric - found).norm() < 1e-5);
}
