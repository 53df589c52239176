// Synthesis against the sum that defines it, term by term with J_n, roots and norms from Boost, and the way there and
// back.
#include <gtest/gtest.h>

#include <algorithm>
#include <boost/math/special_functions/bessel.hpp>
#include <cmath>
#include <complex>
#include <ostream>
#include <random>
#include <string>
#include <vector>

#include "support/disk_reference.hpp"
#include "support/disk_run.hpp"
#include "support/scenes.hpp"

namespace tambour {
namespace {

using testing::analyse;
using testing::disk_plan;
using testing::draw;
using testing::synthesise;
using testing::white_noise;

// The promised errors, relative to the largest pixel.
constexpr double float_bar = 1e-6;
constexpr double double_bar = 1e-12;

struct Pixel {
  int x, y;
};

struct Case {
  int rows, columns;
  DiskGeometry geometry;
  Centre centre;
  int pixels;  // checked, besides those about the centre and at the rim; 0 = all
};

void PrintTo(const Case& c, std::ostream* out) {
  *out << c.columns << " x " << c.rows << ", radius " << c.geometry.radius << ", " << to_string(c.geometry.edge)
       << ", centre " << c.centre.x << ", " << c.centre.y;
}

double distance(const Case& c, Pixel p) { return std::hypot(p.x - c.centre.x, p.y - c.centre.y); }

std::vector<Pixel> chosen_pixels(const Case& c) {
  std::vector<Pixel> inside, chosen;
  for (int y = 0; y < c.rows; ++y)
    for (int x = 0; x < c.columns; ++x)
      if (distance(c, {x, y}) <= c.geometry.radius) inside.push_back({x, y});
  if (c.pixels == 0) return inside;
  std::mt19937 engine(9);
  std::shuffle(inside.begin(), inside.end(), engine);
  for (const Pixel p : inside) {
    const double r = distance(c, p);
    const bool near = r < 1.5 || r > c.geometry.radius - 0.15;
    if (near || static_cast<int>(chosen.size()) < c.pixels) chosen.push_back(p);
  }
  return chosen;
}

std::vector<std::complex<double>> white_coefficients(const DiskBasis& basis, unsigned seed) {
  const auto noise = white_noise<double>(2 * basis.size(), seed);
  std::vector<std::complex<double>> a(basis.size());
  for (std::size_t i = 0; i < a.size(); ++i)
    a[i] = {noise[2 * i], basis.terms()[i].angular_order == 0 ? 0 : noise[2 * i + 1]};
  return a;
}

class DiskSynthesis : public ::testing::TestWithParam<Case> {};

TEST_P(DiskSynthesis, EqualsTheSumOverTheTerms) {
  const Case& c = GetParam();
  const auto plan = disk_plan<double>(c.rows, c.columns, c.geometry);
  const auto single_plan = disk_plan<float>(c.rows, c.columns, c.geometry);
  const DiskBasis& basis = plan.basis();
  const auto a = white_coefficients(basis, 11);
  const auto in_double = synthesise(plan, a, {c.centre});
  const auto in_float = synthesise(single_plan, std::vector<std::complex<float>>(a.begin(), a.end()), {c.centre});

  std::vector<double> roots, norms;
  for (const Term& term : basis.terms()) {
    const auto root = reference::root(c.geometry.edge, term.angular_order, term.radial_index);
    roots.push_back(static_cast<double>(root));
    norms.push_back(
        static_cast<double>(reference::normalisation(c.geometry.edge, term.angular_order, root, c.geometry.radius)));
  }
  double double_error = 0, float_error = 0, largest = 0;
  for (const Pixel p : chosen_pixels(c)) {
    const double r = distance(c, p), theta = std::atan2(p.y - c.centre.y, p.x - c.centre.x);
    double sum = 0;
    for (std::size_t i = 0; i < a.size(); ++i) {
      const int n = basis.terms()[i].angular_order;
      const double psi = norms[i] * boost::math::cyl_bessel_j(n, roots[i] * r / c.geometry.radius);
      sum += (n == 0 ? 1 : 2) * psi * (a[i] * std::polar(1.0, n * theta)).real();
    }
    double_error = std::max(double_error, std::abs(in_double[p.y * c.columns + p.x] - sum));
    float_error = std::max(float_error, std::abs(in_float[p.y * c.columns + p.x] - sum));
    largest = std::max(largest, std::abs(sum));
  }
  EXPECT_LE(double_error, double_bar * largest);
  EXPECT_LE(float_error, float_bar * largest);

  for (int y = 0; y < c.rows; ++y)
    for (int x = 0; x < c.columns; ++x)
      if (distance(c, {x, y}) > c.geometry.radius + 1e-9) {
        ASSERT_EQ(in_double[y * c.columns + x], 0) << x << ", " << y;
        ASSERT_EQ(in_float[y * c.columns + x], 0) << x << ", " << y;
      }
}

constexpr Edge dirichlet = Edge::dirichlet, neumann = Edge::neumann;

INSTANTIATE_TEST_SUITE_P(
    Geometries, DiskSynthesis,
    ::testing::Values(
        // Fewer rings than the kernel is wide.
        Case{16, 16, {.radius = 4, .edge = Edge::dirichlet, .bandlimit = 0.2}, {7.5, 7.5}, 0},
        Case{24, 24, {.radius = 10, .edge = Edge::neumann, .bandlimit = 0.25}, {11.3, 11.6}, 0},
        Case{12, 12, {4.5, dirichlet, 0.9}, {5.5, 5.5}, 0}, Case{12, 12, {5, neumann, 1.0}, {5.7, 5.1}, 0},
        Case{33, 33, {14, dirichlet, 0.9}, {16, 16}, 0}, Case{32, 36, {14.3, neumann, 0.9}, {17.31, 15.86}, 0},
        Case{32, 32, {15, dirichlet, 0.4}, {15.5, 15.5}, 0},
        // the disk leaves the frame
        Case{24, 20, {9.5, neumann, 0.8}, {2.4, 21.3}, 0}, Case{64, 64, {30, dirichlet, 1.0}, {31.5, 31.5}, 40},
        Case{65, 65, {30, neumann, 0.9}, {32, 32}, 40}, Case{64, 64, {29.5, neumann, 0.9}, {31.78, 31.34}, 40},
        Case{128, 128, {62, dirichlet, 0.9}, {63.5, 63.5}, 20}, Case{128, 128, {62, neumann, 0.9}, {63.66, 63.2}, 20}));

// Blobs of 3 px inside 0.4 R are in the span of the basis to 1e-13; bound: ten times the error of one transform.
TEST(DiskRoundTrip, GivesBackCompactBandLimitedScenes) {
  const int side = 97;
  const double radius = 40;
  for (const Edge edge : {Edge::dirichlet, Edge::neumann}) {
    const auto plan = disk_plan<double>(side, side, {radius, edge, 0.9});
    for (const Centre centre : {Centre{48, 48}, Centre{47.7, 48.45}}) {
      const auto image =
          draw({{0.05 * radius, 0.4, 3, 1.0}, {0.3 * radius, 2.5, 3, -0.7}, {0.4 * radius, -1.2, 3, 0.9}}, centre, 0,
               side, side);
      const auto back = synthesise(plan, analyse(plan, image, {centre}), {centre});
      double worst = 0, largest = 0;
      for (int y = 0; y < side; ++y)
        for (int x = 0; x < side; ++x) {
          if (std::hypot(x - centre.x, y - centre.y) > radius) continue;
          worst = std::max(worst, std::abs(back[y * side + x] - image[y * side + x]));
          largest = std::max(largest, std::abs(image[y * side + x]));
        }
      EXPECT_LE(worst, 1e-11 * largest);
    }
  }
}

TEST(DiskRoundTrip, ImaginaryPartOfOrderZeroIsIgnored) {
  const auto plan = disk_plan<double>(24, 24, {10, Edge::neumann, 0.8});
  auto a = white_coefficients(plan.basis(), 12);
  const auto expected = synthesise(plan, a, {{11.2, 11.9}});
  for (std::size_t i = 0; i < plan.basis().order_begin(1); ++i) a[i] += std::complex<double>(0, 3);
  EXPECT_EQ(synthesise(plan, a, {{11.2, 11.9}}), expected);
}

}  // namespace
}  // namespace tambour
