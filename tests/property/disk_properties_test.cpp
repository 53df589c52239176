// What rotating, mirroring, shifting, adding and scaling an image must do to its coefficients.
#include <gtest/gtest.h>

#include <algorithm>
#include <boost/math/quadrature/gauss.hpp>
#include <boost/math/special_functions/bessel.hpp>
#include <cmath>
#include <complex>
#include <numbers>
#include <vector>

#include "support/csv.hpp"
#include "support/disk_run.hpp"
#include "support/scenes.hpp"

namespace tambour {
namespace {

using testing::analyse;
using testing::Blob;
using testing::disk_plan;
using testing::draw;
using testing::relative_difference;
using testing::synthesise;
using testing::white_noise;
using Coefficients = std::vector<std::complex<double>>;
using std::numbers::pi;

constexpr double bar = 1e-12;  // the error of a transform in double

/// a_nk e^{-i n alpha}.
Coefficients turned(const DiskBasis& basis, Coefficients a, double alpha) {
  for (std::size_t i = 0; i < a.size(); ++i) a[i] *= std::polar(1.0, -basis.terms()[i].angular_order * alpha);
  return a;
}

class DiskProperties : public ::testing::TestWithParam<Edge> {};

TEST_P(DiskProperties, QuarterTurnOfThePixelsIsExact) {
  const int side = 50;
  const auto plan = disk_plan<double>(side, side, {21, GetParam(), 0.9});
  const auto image = white_noise<double>(side * side, 1);
  const double middle = (side - 1) / 2.0;
  for (const Centre centre : {Centre{middle, middle}, Centre{25.3, 23.6}}) {
    const auto before = analyse(plan, image, {centre});
    std::vector<double> moved(image.size());
    Centre moved_centre = centre;
    // theta grows by a quarter turn: (dx, dy) goes to (-dy, dx) about the middle of the frame.
    for (int y = 0; y < side; ++y)
      for (int x = 0; x < side; ++x) moved[x * side + (side - 1 - y)] = image[y * side + x];
    moved_centre = {middle - (centre.y - middle), middle + (centre.x - middle)};
    const auto after = analyse(plan, moved, {moved_centre});

    Coefficients expected = before;
    const std::complex<double> powers[] = {{1, 0}, {0, -1}, {-1, 0}, {0, 1}};  // (-i)^n
    for (std::size_t i = 0; i < expected.size(); ++i) expected[i] *= powers[plan.basis().terms()[i].angular_order % 4];
    EXPECT_LE(relative_difference(after, expected), bar);
    double worst = 0, largest = 0;
    for (std::size_t i = 0; i < before.size(); ++i) {
      worst = std::max(worst, std::abs(std::abs(after[i]) - std::abs(before[i])));
      largest = std::max(largest, std::abs(before[i]));
    }
    EXPECT_LE(worst, bar * largest);
  }
}

TEST_P(DiskProperties, MirrorInTheXAxisConjugates) {
  const int rows = 46, columns = 52;
  const auto plan = disk_plan<double>(rows, columns, {20.5, GetParam(), 0.9});
  const auto image = white_noise<double>(rows * columns, 2);
  std::vector<double> mirrored(image.size());
  for (int y = 0; y < rows; ++y)
    std::copy_n(image.begin() + y * columns, columns, mirrored.begin() + (rows - 1 - y) * columns);
  auto expected = analyse(plan, image, {{26.1, 21.7}});
  for (auto& a : expected) a = std::conj(a);
  EXPECT_LE(relative_difference(analyse(plan, mirrored, {{26.1, rows - 1 - 21.7}}), expected), bar);
}

std::vector<Blob> compact_scene(double radius, double sigma) {
  return {{0.1 * radius, 0.3, sigma, 1.0}, {0.35 * radius, 1.9, sigma, -0.6}, {0.4 * radius, -2.2, sigma, 0.8}};
}

// Blobs of 3 px fall below 1e-19 at the edge of the pixel band: drawn anew at any angle they are the rotated field.
TEST_P(DiskProperties, RotationByAnyAngleMultipliesByItsPhase) {
  const int side = 97;
  const Centre centre{48.2, 47.9};
  const auto plan = disk_plan<double>(side, side, {40, GetParam(), 0.9});
  const auto scene = compact_scene(40, 3);
  const auto before = analyse(plan, draw(scene, centre, 0, side, side), {centre});
  for (const double alpha : {0.1, 0.77, -2.0, 3.0}) {
    const auto after = analyse(plan, draw(scene, centre, alpha, side, side), {centre});
    EXPECT_LE(relative_difference(after, turned(plan.basis(), before, alpha)), bar) << "angle " << alpha;
  }
}

// The centre may be anywhere: moving object and centre together changes nothing.
TEST_P(DiskProperties, SubPixelShiftOfObjectAndCentreTogether) {
  const int side = 97;
  const auto plan = disk_plan<double>(side, side, {40, GetParam(), 0.9});
  const auto scene = compact_scene(40, 3);
  const auto first = analyse(plan, draw(scene, {48, 48}, 0, side, side), {{48, 48}});
  for (const Centre centre : {Centre{48.5, 48.5}, Centre{46.13, 50.72}, Centre{55.9, 41.2}})
    EXPECT_LE(relative_difference(analyse(plan, draw(scene, centre, 0, side, side), {centre}), first), bar);
}

/// Standard deviation of |a|^2 over rotations of the object, largest over the terms, relative to the largest |a|^2.
double spread_of_powers(Edge edge, double sigma) {
  const int side = 96, turns = 24;
  const double radius = 22;
  const Centre centre{47.5, 47.5};
  const std::vector<Blob> scene = {
      {0.075 * radius, 0.3, sigma, 1.0}, {0.24 * radius, 1.9, sigma, 0.6}, {0.3 * radius, -2.2, sigma, 0.8}};
  const auto plan = disk_plan<double>(side, side, {radius, edge, 0.9});
  std::vector<std::vector<double>> powers(plan.basis().size());
  for (int turn = 0; turn < turns; ++turn) {
    const auto a =
        analyse(plan, draw(scene, centre, 2 * pi * (turn + 0.31 * turn / turns) / turns, side, side), {centre});
    for (std::size_t i = 0; i < a.size(); ++i) powers[i].push_back(std::norm(a[i]));
  }
  double worst = 0, largest = 0;
  for (const auto& power : powers) {
    double mean = 0, square = 0;
    for (const double p : power) mean += p / turns;
    for (const double p : power) square += (p - mean) * (p - mean) / turns;
    worst = std::max(worst, std::sqrt(square));
    largest = std::max(largest, mean);
  }
  return worst / largest;
}

// What is left is the aliasing of the pixels themselves: the integral by brute force spreads as far. Bounds: dense
// experiments on compact objects at radius 12 to 24, Dirichlet, gave 1e-12 for blobs of 2 px and 3e-5 for 1 px.
TEST(DiskInvariants, PowersStayUnderRotation) {
  EXPECT_LE(spread_of_powers(Edge::dirichlet, 2), 1e-12);
  EXPECT_LE(spread_of_powers(Edge::dirichlet, 1), 3e-5);
  EXPECT_LE(spread_of_powers(Edge::neumann, 1), 3e-5);
}

TEST_P(DiskProperties, Linearity) {
  const int side = 40;
  const auto plan = disk_plan<double>(side, side, {18, GetParam(), 0.9});
  const auto f = white_noise<double>(side * side, 3), g = white_noise<double>(side * side, 4);
  std::vector<double> sum(f.size());
  for (std::size_t i = 0; i < f.size(); ++i) sum[i] = 2.5 * f[i] - 0.75 * g[i];
  const Centre centre{19.1, 19.9};
  auto expected = analyse(plan, f, {centre});
  const auto other = analyse(plan, g, {centre});
  for (std::size_t i = 0; i < expected.size(); ++i) expected[i] = 2.5 * expected[i] - 0.75 * other[i];
  EXPECT_LE(relative_difference(analyse(plan, sum, {centre}), expected), bar);
}

// Parseval: the field lies inside disk and band, so the sum over the pixels is the integral of its square.
TEST_P(DiskProperties, EnergyOfABandLimitedField) {
  const int side = 97;
  const Centre centre{48.4, 47.7};
  const auto plan = disk_plan<double>(side, side, {40, GetParam(), 0.9});
  const auto image = draw(compact_scene(40, 3), centre, 0, side, side);
  const auto a = analyse(plan, image, {centre});
  double pixels = 0, terms = 0;
  for (const double value : image) pixels += value * value;
  for (std::size_t i = 0; i < a.size(); ++i) terms += sign_weight(plan.basis().terms()[i]) * std::norm(a[i]);
  EXPECT_NEAR(terms / pixels, 1, bar);
}

// <analyse f, a> = <f, synthesise a> for the energy's inner product, up to what a pixel sum differs from the integral:
// nothing, when f lies inside disk and band.
TEST_P(DiskProperties, AnalysisAndSynthesisAreAdjoint) {
  const int side = 97;
  const Centre centre{48.4, 47.7};
  const auto plan = disk_plan<double>(side, side, {40, GetParam(), 0.8});
  const auto terms = plan.basis().terms();
  const auto image = draw(compact_scene(40, 3), centre, 0, side, side);
  const auto of_image = analyse(plan, image, {centre});
  const auto noise = white_noise<double>(2 * terms.size(), 5);
  Coefficients a(terms.size());
  for (std::size_t i = 0; i < a.size(); ++i) a[i] = {noise[2 * i], terms[i].angular_order == 0 ? 0 : noise[2 * i + 1]};
  const auto synthesised = synthesise(plan, a, {centre});
  double left = 0, right = 0, size = 0;
  for (std::size_t i = 0; i < a.size(); ++i) {
    const double product = sign_weight(terms[i]) * (of_image[i] * std::conj(a[i])).real();
    left += product;
    size += std::abs(product);
  }
  for (std::size_t i = 0; i < image.size(); ++i) right += image[i] * synthesised[i];
  EXPECT_NEAR(left, right, bar * size);
}

// Graf's theorem: a mode J_n(l r'/R) e^{i n theta'} about a displaced point is sum_m c_m J_m(l r/R) e^{i m theta} about
// the centre, so its coefficient of order m is c_m times a radial integral. The file gives c_m. The mode is drawn in
// two images, real and imaginary part, under a smooth window that is 1 to 1e-20 inside the disk and keeps the frame's
// edge dark; its spectrum is under 1e-18 at the edge of the pixel band.
TEST_P(DiskProperties, ShiftedModesFollowGrafsTheorem) {
  const testing::Csv csv(TAMBOUR_TEST_DATA "/disk/graf_shift.csv");
  const int side = 256;
  const double radius = 40;
  const Centre centre{127.4, 128.2};
  const auto plan = disk_plan<double>(side, side, {radius, GetParam(), 0.9});
  int checked = 0;
  for (std::size_t row = 0; row < csv.rows();) {
    const std::size_t begin = row;
    while (row < csv.rows() && csv.text(row, "kind") == "coef" && csv.text(row, "n") == csv.text(begin, "n") &&
           csv.text(row, "d") == csv.text(begin, "d"))
      ++row;
    if (row == begin) {  // a row of another kind
      ++row;
      continue;
    }
    const int n = csv.integer(begin, "n");
    const double l = csv.number(begin, "l");
    const double dx = radius * csv.number(begin, "d") * std::cos(csv.number(begin, "phi"));
    const double dy = radius * csv.number(begin, "d") * std::sin(csv.number(begin, "phi"));
    std::vector<double> images(2 * side * side);
    for (int y = 0; y < side; ++y)
      for (int x = 0; x < side; ++x) {
        const double px = x - centre.x, py = y - centre.y;
        const double window = std::erfc((std::hypot(px, py) - 84) / 6) / 2;
        const std::complex<double> mode = boost::math::cyl_bessel_j(n, l * std::hypot(px - dx, py - dy) / radius) *
                                          std::polar(1.0, n * std::atan2(py - dy, px - dx));
        images[y * side + x] = window * mode.real();
        images[side * side + y * side + x] = window * mode.imag();
      }
    const auto a = analyse(plan, images, {centre, centre});
    const std::size_t terms = plan.basis().size();

    double worst = 0, largest = 0;
    for (std::size_t line = begin; line < row; ++line) {
      const int m = csv.integer(line, "p"), order = std::abs(m);
      const std::complex c(csv.number(line, "re"), csv.number(line, "im"));
      for (std::size_t i = plan.basis().order_begin(order); i < plan.basis().order_begin(order + 1); ++i) {
        const std::complex re = a[i], im = a[terms + i];
        const std::complex<double> unit(0, 1);
        // A real image has conj(a) at order -m; there J_{-m} = (-1)^m J_m.
        const auto ours = m >= 0 ? re + unit * im : std::conj(re) + unit * std::conj(im);
        const double sign = m < 0 && m % 2 != 0 ? -1 : 1;
        const auto product = [&](double r) {
          return r * boost::math::cyl_bessel_j(order, l * r / radius) * plan.basis().radial(i, r);
        };
        double integral = 0;
        for (int panel = 0; panel < 8; ++panel)
          integral += boost::math::quadrature::gauss<double, 30>::integrate(product, panel * radius / 8,
                                                                            (panel + 1) * radius / 8);
        worst = std::max(worst, std::abs(ours - 2 * pi * sign * c * integral));
        largest = std::max(largest, std::abs(ours));
      }
    }
    EXPECT_LE(worst, bar * largest) << "mode of order " << n << " shifted by " << dx << ", " << dy;
    ++checked;
  }
  EXPECT_EQ(checked, 12);
}

INSTANTIATE_TEST_SUITE_P(Edges, DiskProperties, ::testing::Values(Edge::dirichlet, Edge::neumann),
                         [](const auto& edge) { return std::string(to_string(edge.param)); });

}  // namespace
}  // namespace tambour
