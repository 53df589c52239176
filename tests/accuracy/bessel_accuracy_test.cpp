// Roots, norms and families of Bessel functions against numbers from outside. How the files of tests/data/bessel were
// made is told in tests/data/PROVENANCE.md.
#include <gtest/gtest.h>

#include <algorithm>
#include <boost/math/quadrature/gauss.hpp>
#include <boost/math/special_functions/bessel.hpp>
#include <cmath>
#include <cstddef>
#include <functional>
#include <limits>
#include <map>
#include <string>
#include <utility>
#include <vector>

#include "support/csv.hpp"
#include "tambour/bessel.hpp"

namespace tambour {
namespace {

using testing::Csv;

constexpr double kPi = 3.14159265358979323846;
// The bounds promised in bessel.hpp.
constexpr double kRootUlps = 2;
constexpr double kNormBound = 1e-13;
constexpr double kValueBound = 1e-14;

Csv read(const char* name) { return Csv(std::string(TAMBOUR_TEST_DATA "/bessel/") + name); }

double ulps(double value, long double reference) {
  const auto near = static_cast<double>(reference);
  const double ulp = std::nextafter(near, std::numeric_limits<double>::infinity()) - near;
  return static_cast<double>(std::abs(static_cast<long double>(value) - reference)) / ulp;
}

// Amplitude of the oscillation of J_n and of J_n' to the right of the turning point (DLMF 10.19.6, 10.19.7).
double amplitude(int n, double x) { return x > n ? std::sqrt(2 / (kPi * std::sqrt((x - n) * (x + n)))) : 0; }
double slope_amplitude(int n, double x) { return x > n ? amplitude(n, x) * std::sqrt((x - n) * (x + n)) / x : 0; }

void check_roots(Edge edge, const char* file, const char* column) {
  const Csv reference = read(file);
  const std::size_t constant = edge == Edge::neumann ? 1 : 0;  // the file counts positive roots only
  std::map<int, std::vector<double>> single;
  const double limit = 1500;
  const auto lists = bessel_roots_up_to(1000, edge, limit);
  int checked_in_lists = 0;
  for (std::size_t row = 0; row < reference.rows(); ++row) {
    const int n = reference.integer(row, "n");
    const auto k = static_cast<std::size_t>(reference.integer(row, "k"));
    const long double root = reference.wide(row, column);
    auto& roots = single[n];
    if (roots.empty()) roots = bessel_roots(n, edge, 4700);
    const std::size_t index = k - 1 + (n == 0 ? constant : 0);
    ASSERT_LT(index, roots.size());
    EXPECT_LE(ulps(roots[index], root), kRootUlps) << "order " << n << " index " << k;
    if (root < limit) {
      EXPECT_LE(ulps(lists[static_cast<std::size_t>(n)].at(index), root), kRootUlps) << "order " << n << " index " << k;
      ++checked_in_lists;
    }
  }
  EXPECT_GT(checked_in_lists, 150);
}

TEST(BesselRootsAccuracy, DirichletFile) { check_roots(Edge::dirichlet, "zeros_dirichlet.csv", "j_nk"); }

TEST(BesselRootsAccuracy, NeumannFile) { check_roots(Edge::neumann, "zeros_neumann.csv", "jp_nk"); }

// Boost.Math as second opinion at the orders beyond the files (its zeros are right to 1e-16 where those overlap).
TEST(BesselRootsAccuracy, HighOrdersAgainstBoost) {
  for (const int n : {2000, 3333, 5000}) {
    const std::vector<double> roots = bessel_roots(n, Edge::dirichlet, n + 6000.0);
    for (const int k : {1, 2, 3, 10, 100, 400, 1000}) {
      ASSERT_LE(static_cast<std::size_t>(k), roots.size());
      EXPECT_LE(
          ulps(roots[static_cast<std::size_t>(k - 1)], boost::math::cyl_bessel_j_zero(static_cast<long double>(n), k)),
          kRootUlps)
          << n << " " << k;
    }
  }
}

// One Newton step in long double tells the error of a root.
TEST(BesselRootsAccuracy, FarAndHighRootsByTheirResidual) {
  for (const auto& [n, limit] : {std::pair{0, 1e5}, {17, 1e5}, {700, 1e5}, {5000, 2e4}}) {
    for (const Edge edge : {Edge::dirichlet, Edge::neumann}) {
      const std::vector<double> roots = bessel_roots(n, edge, limit);
      for (std::size_t k = 1; k < roots.size(); k += roots.size() / 60) {
        const long double x = roots[k];
        const long double value = boost::math::cyl_bessel_j(n, x);
        const long double slope = n / x * value - boost::math::cyl_bessel_j(n + 1, x);
        const long double second = -(slope / x + (1 - n / x) * (1 + n / x) * value);
        const long double correction = edge == Edge::dirichlet ? value / slope : slope / second;
        EXPECT_LE(ulps(roots[k], x - correction), kRootUlps) << to_string(edge) << " " << n << " " << k;
      }
    }
  }
}

// Digits as printed in Abramowitz & Stegun, Table 9.5, and DLMF 10.21; quoted from memory.
TEST(BesselRootsAccuracy, PrintedTables) {
  struct Printed {
    int n;
    Edge edge;
    std::vector<double> roots;
    double half_digit;
  };
  const Edge d = Edge::dirichlet;
  const Edge s = Edge::neumann;
  for (const Printed& line :
       {Printed{0, d, {2.4048255577, 5.5200781103, 8.6537279129}, 6e-11},
        Printed{1, d, {3.83171, 7.01559, 10.17347, 13.32369, 16.47063}, 6e-6},
        Printed{2, d, {5.13562, 8.41724, 11.61984, 14.79595}, 6e-6}, Printed{3, d, {6.38016, 9.76102, 13.01520}, 6e-6},
        Printed{8, d, {12.22509}, 6e-6}, Printed{0, s, {0, 3.83171, 7.01559}, 6e-6},
        Printed{1, s, {1.84118, 5.33144, 8.53632, 11.70600}, 6e-6}, Printed{2, s, {3.05424, 6.70613, 9.96947}, 6e-6},
        Printed{8, s, {9.64742}, 6e-6}}) {
    const std::vector<double> roots = bessel_roots(line.n, line.edge, 20);
    for (std::size_t k = 0; k < line.roots.size(); ++k) EXPECT_NEAR(roots[k], line.roots[k], line.half_digit) << line.n;
  }
}

TEST(BesselNormAccuracy, File) {
  const Csv reference = read("norms.csv");
  for (std::size_t row = 0; row < reference.rows(); ++row) {
    const Edge edge = reference.text(row, "basis") == "dirichlet" ? Edge::dirichlet : Edge::neumann;
    const double norm = bessel_norm(reference.integer(row, "n"), edge, reference.number(row, "l"));
    const double expected = reference.number(row, "closed_form");
    EXPECT_NEAR(norm / expected, 1, kNormBound) << to_string(edge) << " " << reference.text(row, "n");
  }
}

// The integral over [0, 1] by Gauss-Legendre on panels short against the oscillation.
double integrate(const std::function<double(double)>& f, double highest) {
  const int panels = 2 + static_cast<int>(highest / 10);
  double sum = 0;
  for (int i = 0; i < panels; ++i) {
    sum +=
        boost::math::quadrature::gauss<double, 30>::integrate(f, static_cast<double>(i) / panels, (i + 1.0) / panels);
  }
  return sum;
}

// DLMF 10.22.37 and 10.22.38: orthogonality and norms at the roots, by quadrature of the table's own values.
TEST(BesselNormAccuracy, OrthogonalityAndNormsByQuadrature) {
  for (const int n : {0, 1, 4, 31}) {
    for (const Edge edge : {Edge::dirichlet, Edge::neumann}) {
      const std::vector<double> roots = bessel_roots(n, edge, n + 60.0);
      const BesselTable table(n, n, roots.back());
      ASSERT_GE(roots.size(), 12u);
      for (const std::size_t k : {0, 1, 5, 11}) {
        for (const std::size_t m : {0, 2, 5, 10}) {
          const double product =
              integrate([&](double x) { return x * table.value(n, roots[k] * x) * table.value(n, roots[m] * x); },
                        roots[k] + roots[m]);
          const double norm = bessel_norm(n, edge, roots[k]);
          const double scale = std::sqrt(norm * bessel_norm(n, edge, roots[m]));
          EXPECT_NEAR(product / scale, k == m ? 1 : 0, 2e-14) << to_string(edge) << " " << n << " " << k << " " << m;
        }
      }
    }
  }
}

// Lommel's integrals at arguments that are no roots (DLMF 10.22.4, 10.22.5; Watson 5.11).
TEST(BesselTableAccuracy, LommelIntegrals) {
  const BesselTable table(0, 41, 80);
  for (const int n : {0, 1, 6, 40}) {
    for (const auto& [a, b] : {std::pair{3.3, 7.1}, {20.0, 55.5}, {61.25, 79.0}}) {
      const auto f = [&, a = a, b = b](double x) { return x * table.value(n, a * x) * table.value(n, b * x); };
      const double mixed =
          (a * table.value(n + 1, a) * table.value(n, b) - b * table.value(n, a) * table.value(n + 1, b)) /
          ((a - b) * (a + b));
      EXPECT_NEAR(integrate(f, a + b), mixed, 1e-15) << n << " " << a << " " << b;
      const auto square = [&, b = b](double x) { return x * std::pow(table.value(n, b * x), 2); };
      const double own =
          0.5 * (std::pow(table.derivative(n, b), 2) + (1 - n / b) * (1 + n / b) * std::pow(table.value(n, b), 2));
      EXPECT_NEAR(integrate(square, 2 * b), own, 1e-15) << n << " " << b;
    }
  }
}

struct Point {
  int n;
  double x, value, slope;
};

// Checks J_n and J_n' with tables for bands of orders, as a caller would use them; returns how many were compared.
int check_values(const std::vector<Point>& points) {
  constexpr int kBand = 300;
  std::map<int, std::vector<Point>> bands;
  for (const Point& point : points) bands[point.n / kBand].push_back(point);
  int compared = 0;
  for (const auto& [band, members] : bands) {
    double x_max = 0;
    for (const Point& p : members) x_max = std::max(x_max, p.x);
    const BesselTable table(band * kBand, std::min(band * kBand + kBand - 1, 5100), x_max);
    for (const Point& p : members) {
      const double value = table.value(p.n, p.x);
      const double slope = table.derivative(p.n, p.x);
      double again = 0;
      table.values(p.n, &p.x, 1, &again);
      EXPECT_EQ(value, again) << p.n << " " << p.x;
      const double smallest = std::numeric_limits<double>::min();
      if (std::abs(p.value) < smallest) {
        EXPECT_LE(std::abs(value), smallest) << p.n << " " << p.x;
      } else {
        EXPECT_NEAR(value, p.value, kValueBound * std::max(std::abs(p.value), amplitude(p.n, p.x)))
            << p.n << " " << p.x;
      }
      if (std::abs(p.slope) < smallest) {
        EXPECT_LE(std::abs(slope), smallest) << p.n << " " << p.x;
      } else {
        EXPECT_NEAR(slope, p.slope, kValueBound * std::max(std::abs(p.slope), slope_amplitude(p.n, p.x)))
            << p.n << " " << p.x;
      }
      ++compared;
    }
  }
  return compared;
}

std::vector<Point> points_of(const char* file) {
  const Csv reference = read(file);
  std::vector<Point> points;
  for (std::size_t row = 0; row < reference.rows(); ++row) {
    points.push_back({reference.integer(row, "n"), reference.number(row, "x"), reference.number(row, "J"),
                      reference.number(row, "Jprime")});
  }
  return points;
}

TEST(BesselTableAccuracy, HardPoints) { EXPECT_EQ(check_values(points_of("besselj_hard.csv")), 420); }

TEST(BesselTableAccuracy, RandomPoints) { EXPECT_EQ(check_values(points_of("besselj_random.csv")), 602); }

TEST(BesselTableAccuracy, FarBelowTheTurningPoint) { EXPECT_EQ(check_values(points_of("below_turning.csv")), 120); }

// SciPy as second opinion; its own error is 5e-13 of the amplitude for these x and 3e-16 for these roots.
TEST(BesselTableAccuracy, SciPy) {
  const Csv reference = read("scipy_jv.csv");
  const BesselTable table(0, 150, 1000);
  for (std::size_t row = 0; row < reference.rows(); ++row) {
    const int n = reference.integer(row, "n");
    const double value = reference.number(row, "value");
    const double slope = reference.number(row, "derivative");
    if (reference.text(row, "kind") == "jv") {
      const double x = reference.number(row, "argument");
      EXPECT_NEAR(table.value(n, x), value, 1e-12 * std::max(std::abs(value), amplitude(n, x))) << n << " " << x;
      EXPECT_NEAR(table.derivative(n, x), slope, 1e-12 * std::max(std::abs(slope), slope_amplitude(n, x)))
          << n << " " << x;
    } else {
      const auto k = static_cast<std::size_t>(reference.integer(row, "argument"));
      EXPECT_LE(ulps(bessel_roots(n, Edge::dirichlet, value + 1)[k - 1], value), 4) << n << " " << k;
      EXPECT_LE(ulps(bessel_roots(n, Edge::neumann, slope + 1)[n == 0 ? k : k - 1], slope), 4) << n << " " << k;
    }
  }
}

// Drum, duct, telescope and cooling: the numbers of airy_facts.csv, with their sources in that file.
class HandbookFacts : public ::testing::Test {
 protected:
  double fact(const std::string& item) const {
    for (std::size_t row = 0; row < facts_.rows(); ++row) {
      if (facts_.text(row, "item") == item) return facts_.number(row, "value");
    }
    ADD_FAILURE() << "no fact " << item;
    return 0;
  }
  static double root(int n, std::size_t k) { return bessel_roots(n, Edge::dirichlet, 60).at(k - 1); }
  static std::string numbered(const char* name, std::size_t k) { return name + std::to_string(k); }

  const Csv facts_ = read("airy_facts.csv");
  const BesselTable table_{0, 2, 60};
};

TEST_F(HandbookFacts, AiryPattern) {
  for (std::size_t k = 1; k <= 10; ++k) {
    const double dark = root(1, k);
    EXPECT_NEAR(dark / kPi, fact(numbered("airy_dark_ring_", k)), 1e-14);
    EXPECT_NEAR(1 - std::pow(table_.value(0, dark), 2), fact(numbered("encircled_energy_dark_ring_", k)), 1e-15);
  }
  for (std::size_t k = 1; k <= 5; ++k) {
    const double bright = root(2, k);
    EXPECT_NEAR(bright / kPi, fact(numbered("airy_bright_ring_", k)), 1e-14);
    EXPECT_NEAR(std::pow(2 * table_.value(1, bright) / bright, 2),
                fact(numbered("airy_bright_ring_", k) + "_rel_intensity"), 1e-16);
  }
  const double half = fact("airy_half_max_x");
  EXPECT_NEAR(std::pow(2 * table_.value(1, half) / half, 2), 0.5, 1e-15);
  for (const char* share : {"0.5", "0.8", "0.9"}) {
    const double radius = fact(std::string("encircled_energy_radius_") + share);
    EXPECT_NEAR(1 - std::pow(table_.value(0, radius), 2) - std::pow(table_.value(1, radius), 2), std::stod(share),
                1e-15);
  }
}

// The lowest modes in order of frequency, from the sorted roots of all orders.
TEST_F(HandbookFacts, MembraneAndDuct) {
  for (const Edge edge : {Edge::dirichlet, Edge::neumann}) {
    std::vector<double> all;
    for (const auto& list : bessel_roots_up_to(20, edge, 20)) all.insert(all.end(), list.begin(), list.end());
    std::sort(all.begin(), all.end());
    if (edge == Edge::dirichlet) {
      for (std::size_t i = 1; i <= 25; ++i) {
        EXPECT_NEAR(all[i - 1] / all[0], fact((i < 10 ? "membrane_ratio_0" : "membrane_ratio_") + std::to_string(i)),
                    4e-15);
      }
    } else {
      for (std::size_t i = 1; i <= 20; ++i) {
        EXPECT_NEAR(all[i], fact((i < 10 ? "rigid_duct_root_0" : "rigid_duct_root_") + std::to_string(i)), 4e-15);
      }
    }
  }
}

TEST_F(HandbookFacts, CoolingCylinder) {
  EXPECT_NEAR(std::pow(root(0, 1), 2), fact("diffusion_decay_dirichlet"), 4e-15);
  EXPECT_NEAR(std::pow(root(1, 1), 2), fact("diffusion_decay_neumann_axisym"), 8e-15);
  for (std::size_t k = 1; k <= 5; ++k) {
    const double j = root(0, k);
    EXPECT_NEAR(4 / (j * j), fact(numbered("cooling_weight_", k)), 1e-15);
    EXPECT_NEAR(2 / (j * table_.value(1, j)), fact(numbered("f1_coefficient_", k)), 4e-15);
  }
}

// Rayleigh's sums over all roots; the part beyond the limit from McMahon's roots (k + n/2 - 1/4) pi.
TEST_F(HandbookFacts, RayleighSums) {
  for (int n = 0; n <= 5; ++n) {
    const std::vector<double> roots = bessel_roots(n, Edge::dirichlet, 1e5);
    double second = 0;
    double fourth = 0;
    for (auto it = roots.rbegin(); it != roots.rend(); ++it) {
      second += 1 / (*it * *it);
      fourth += 1 / std::pow(*it, 4);
    }
    const double rest = 1 / (kPi * kPi * (static_cast<double>(roots.size()) + 0.5 * n + 0.25));
    EXPECT_NEAR(second + rest, fact("rayleigh_sum2_n" + std::to_string(n)), 1e-13) << n;
    EXPECT_NEAR(fourth, fact("rayleigh_sum4_n" + std::to_string(n)), 1e-13) << n;
  }
}

TEST_F(HandbookFacts, McMahonsExpansion) {
  for (std::size_t k = 1; k <= 5; ++k) {
    const double b = (static_cast<double>(k) - 0.25) * kPi;
    const double expansion = b + 1 / (8 * b) - 124 / (3 * std::pow(8 * b, 3));
    EXPECT_NEAR(expansion - root(0, k), fact("mcmahon_j0_" + std::to_string(k) + "_err"), 5e-15);
  }
}

// I_0(x) e^{-x} by mpmath 1.2.1 at 30 digits; the first and third also in Abramowitz & Stegun, Table 9.8 (from memory).
TEST(BesselI0Accuracy, References) {
  for (const auto& [x, value] : {std::pair{0.5, 0.64503527044915006811},
                                 {1.0, 0.4657596075936404365},
                                 {7.0, 0.15373774467288124815},
                                 {30.0, 0.073145946482237293929},
                                 {100.0, 0.039944379299096682648},
                                 {250.0, 0.025243969387054753633},
                                 {1000.0, 0.012617240455891256586},
                                 {1e5, 0.0012615678379767767669}}) {
    EXPECT_NEAR(bessel_i0_scaled(x) / value, 1, 4e-16) << x;
  }
  EXPECT_NEAR(bessel_i0_scaled(std::nextafter(100, 0)) / bessel_i0_scaled(100), 1, 4e-16);
}

}  // namespace
}  // namespace tambour
