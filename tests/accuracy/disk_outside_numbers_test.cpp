// Normalised functions and coefficients against numbers from outside: tests/data/disk, told in
// tests/data/PROVENANCE.md.
#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <complex>
#include <string>
#include <vector>

#include "support/csv.hpp"
#include "support/disk_reference.hpp"
#include "support/disk_run.hpp"

namespace tambour {
namespace {

using testing::analyse;
using testing::Csv;
using testing::disk_plan;

constexpr double coefficient_bar = 1e-12;  // promised in disk_transform.hpp
constexpr double radial_bar = 1e-13;       // promised in disk_basis.hpp, of the amplitude

const Csv& disk2d() {
  static const Csv csv(TAMBOUR_TEST_DATA "/disk/disk2d.csv");
  return csv;
}

std::size_t index_of(const DiskBasis& basis, int n, int k) {
  const std::size_t index = basis.order_begin(n) + k - 1;
  EXPECT_LT(index, basis.order_begin(n + 1)) << "order " << n << " index " << k;
  return index;
}

class OutsideNumbers : public ::testing::TestWithParam<Edge> {
 protected:
  bool mine(const Csv& csv, std::size_t row, const char* kind, const char* edge_column) const {
    return csv.text(row, "kind") == kind && csv.text(row, edge_column) == to_string(GetParam());
  }
};

TEST_P(OutsideNumbers, RootsAndNormalisationsOfTheDiskFunctions) {
  const DiskBasis basis({40, GetParam(), 0.9});
  int checked = 0;
  for (std::size_t row = 0; row < disk2d().rows(); ++row) {
    if (!mine(disk2d(), row, "C", "basis")) continue;
    const Term& term = basis.terms()[index_of(basis, disk2d().integer(row, "n"), disk2d().integer(row, "k"))];
    const double root = disk2d().number(row, "l"), normalisation = disk2d().number(row, "re");
    EXPECT_NEAR(term.root, root, 4.5e-16 * root);
    EXPECT_NEAR(term.normalisation * basis.radius() / normalisation, 1, 1e-13);
    ++checked;
  }
  EXPECT_EQ(checked, 78);
}

TEST_P(OutsideNumbers, ValuesOfTheDiskFunctions) {
  const DiskBasis basis({40, GetParam(), 0.9});
  int checked = 0;
  for (std::size_t row = 0; row < disk2d().rows(); ++row) {
    if (!mine(disk2d(), row, "psi", "basis")) continue;
    const int n = disk2d().integer(row, "n");
    const std::size_t index = index_of(basis, n, disk2d().integer(row, "k"));
    const double r = disk2d().number(row, "u"), theta = disk2d().number(row, "v");
    const auto ours = basis.radius() * basis.radial(index, r * basis.radius()) * std::polar(1.0, n * theta);
    double amplitude = 0;
    for (int i = 0; i <= 200; ++i)
      amplitude = std::max(amplitude, basis.radius() * std::abs(basis.radial(index, basis.radius() * i / 200)));
    EXPECT_NEAR(std::abs(ours - std::complex(disk2d().number(row, "re"), disk2d().number(row, "im"))), 0,
                radial_bar * amplitude)
        << "order " << n << " r " << r;
    ++checked;
  }
  EXPECT_GT(checked, 200);
}

/// A Gaussian of the file, in units of the radius.
struct Gaussian {
  double distance, angle, sigma;
};

// At R = 48 px the narrowest Gaussian has a sigma of 3 px (its spectrum is under 1e-19 at the edge of the pixel band)
// and all are under 1e-20 at the edge of a frame of 256 px, so that the interpolant of its pixels is the
// Gaussian itself.
TEST_P(OutsideNumbers, CoefficientsOfGaussians) {
  const double radius = 48;
  const std::ptrdiff_t side = 256;
  const auto plan = disk_plan<double>(side, side, {radius, GetParam(), 0.9});
  for (const Centre centre : {Centre{127.5, 127.5}, Centre{126.85, 128.3}}) {
    for (const Gaussian& g : {Gaussian{0.25, 0.5, 0.125}, {0.5, 2.0, 0.0625}, {0, 0, 0.1875}}) {
      std::vector<double> image(side * side);
      const double gx = centre.x + radius * g.distance * std::cos(g.angle);
      const double gy = centre.y + radius * g.distance * std::sin(g.angle);
      for (int y = 0; y < side; ++y)
        for (int x = 0; x < side; ++x) {
          const double dx = (x - gx) / (radius * g.sigma), dy = (y - gy) / (radius * g.sigma);
          image[y * side + x] = std::exp(-(dx * dx + dy * dy) / 2);
        }
      const auto ours = analyse(plan, image, {centre});
      double worst = 0, largest = 0;
      int checked = 0;
      for (std::size_t row = 0; row < disk2d().rows(); ++row) {
        if (!mine(disk2d(), row, "coef", "basis")) continue;
        if (disk2d().number(row, "u") != g.distance || disk2d().number(row, "w") != g.sigma) continue;
        const std::complex theirs(disk2d().number(row, "re"), disk2d().number(row, "im"));
        const std::size_t index = index_of(plan.basis(), disk2d().integer(row, "n"), disk2d().integer(row, "k"));
        // In pixels the integral has R^2 for the area and 1 / R from the normalisation.
        worst = std::max(worst, std::abs(ours[index] / radius - theirs));
        largest = std::max(largest, std::abs(theirs));
        ++checked;
      }
      EXPECT_EQ(checked, g.distance > 0 ? 78 : 6);
      EXPECT_LE(worst, coefficient_bar * largest) << "Gaussian at distance " << g.distance << ", centre " << centre.x;
    }
  }
}

TEST_P(OutsideNumbers, CoefficientsOfAnImageBySciPy) {
  const Csv csv(TAMBOUR_TEST_DATA "/disk/dctn_interpolant.csv");
  ASSERT_EQ(csv.text(0, "kind"), "geometry");
  const int rows = csv.integer(0, "n"), columns = csv.integer(0, "k");
  const Centre centre{csv.number(0, "u"), csv.number(0, "v")};
  std::vector<double> image(rows * columns);
  for (std::size_t row = 0; row < csv.rows(); ++row)
    if (csv.text(row, "kind") == "pixel")
      image[csv.integer(row, "v") * columns + csv.integer(row, "u")] = csv.number(row, "re");

  const auto plan = disk_plan<double>(rows, columns, {csv.number(0, "re"), GetParam(), 1.0});
  const auto ours = analyse(plan, image, {centre});
  const auto field = reference::cosine_interpolant(ImageView<const double>(image.data(), rows, columns));
  double worst = 0, largest = 0;
  int points = 0, coefficients = 0;
  for (std::size_t row = 0; row < csv.rows(); ++row) {
    if (csv.text(row, "kind") == "point") {
      const long double r = csv.wide(row, "u"), theta = csv.wide(row, "v");
      EXPECT_NEAR(static_cast<double>(field(centre.x + r * std::cos(theta), centre.y + r * std::sin(theta))),
                  csv.number(row, "re"), 1e-12);
      ++points;
    }
    if (!mine(csv, row, "coef", "edge")) continue;
    const std::complex theirs(csv.number(row, "re"), csv.number(row, "im"));
    worst =
        std::max(worst, std::abs(ours[index_of(plan.basis(), csv.integer(row, "n"), csv.integer(row, "k"))] - theirs));
    largest = std::max(largest, std::abs(theirs));
    ++coefficients;
  }
  EXPECT_EQ(points, 6);
  EXPECT_EQ(coefficients, 10);
  EXPECT_LE(worst, coefficient_bar * largest);
}

INSTANTIATE_TEST_SUITE_P(Edges, OutsideNumbers, ::testing::Values(Edge::dirichlet, Edge::neumann),
                         [](const auto& edge) { return std::string(to_string(edge.param)); });

}  // namespace
}  // namespace tambour
