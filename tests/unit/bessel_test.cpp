// Roots, norms and families of Bessel functions: ranges, edge cases, counts and identities.
#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <cstring>
#include <limits>
#include <string>
#include <thread>
#include <vector>

#include "tambour/bessel.hpp"
#include "tambour/error.hpp"

namespace tambour {
namespace {

constexpr double kPi = 3.14159265358979323846;
constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
constexpr double kInfinity = std::numeric_limits<double>::infinity();

template <class Call>
void expect_refused(Call call, const std::string& name, const std::string& allowed) {
  try {
    call();
    ADD_FAILURE() << "accepted: " << name;
  } catch (const Error& error) {
    EXPECT_EQ(error.code(), ErrorCode::invalid_argument);
    EXPECT_NE(std::string(error.what()).find(name), std::string::npos) << error.what();
    EXPECT_EQ(error.allowed(), allowed);
    EXPECT_FALSE(error.value().empty());
  }
}

bool same_bits(const std::vector<double>& a, const std::vector<double>& b) {
  return a.size() == b.size() && std::memcmp(a.data(), b.data(), a.size() * sizeof(double)) == 0;
}

TEST(BesselRoots, EdgesHaveTheirTradeNames) {
  EXPECT_STREQ(to_string(Edge::dirichlet), "dirichlet");
  EXPECT_STREQ(to_string(Edge::neumann), "neumann");
}

TEST(BesselRoots, ArgumentsOutsideTheRangeAreRefused) {
  for (const Edge edge : {Edge::dirichlet, Edge::neumann}) {
    expect_refused([&] { bessel_roots(-1, edge, 10); }, "order of the Bessel roots is -1", "0 to 5000");
    expect_refused([&] { bessel_roots(5001, edge, 10); }, "order of the Bessel roots is 5001", "0 to 5000");
    expect_refused([&] { bessel_roots_up_to(-3, edge, 10); }, "max_order of the Bessel roots is -3", "0 to 5000");
    expect_refused([&] { bessel_roots_up_to(9999, edge, 10); }, "max_order of the Bessel roots is 9999", "0 to 5000");
    for (const double limit : {-1e-9, 1.0001e5, kNaN, kInfinity}) {
      expect_refused([&] { bessel_roots(2, edge, limit); }, "limit of the Bessel roots", "0 to 100000");
      expect_refused([&] { bessel_roots_up_to(2, edge, limit); }, "limit of the Bessel roots", "0 to 100000");
    }
  }
}

TEST(BesselRoots, TheConstantIsTheFirstNeumannRootOfOrderZeroOnly) {
  EXPECT_EQ(bessel_roots(0, Edge::neumann, 0), std::vector<double>{0.0});
  EXPECT_EQ(bessel_roots(0, Edge::neumann, 3.8), std::vector<double>{0.0});
  EXPECT_TRUE(bessel_roots(0, Edge::dirichlet, 2.4).empty());
  EXPECT_TRUE(bessel_roots(1, Edge::neumann, 1.8).empty());
  EXPECT_EQ(bessel_roots(1, Edge::neumann, 1.85).size(), 1u);  // 1.8412, the smallest positive root of all
  EXPECT_TRUE(bessel_roots(5000, Edge::dirichlet, 5000).empty());
  const auto lists = bessel_roots_up_to(3, Edge::neumann, 0);
  ASSERT_EQ(lists.size(), 4u);
  EXPECT_EQ(lists[0], std::vector<double>{0.0});
  EXPECT_TRUE(lists[1].empty() && lists[2].empty() && lists[3].empty());
}

TEST(BesselRoots, ALimitAtARootIncludesIt) {
  for (const Edge edge : {Edge::dirichlet, Edge::neumann}) {
    for (const int order : {0, 1, 7, 130}) {
      const std::vector<double> roots = bessel_roots(order, edge, order + 200.0);
      ASSERT_GT(roots.size(), 10u);
      for (const std::size_t k : {std::size_t{2}, std::size_t{9}}) {
        EXPECT_EQ(bessel_roots(order, edge, roots[k]).size(), k + 1);
        EXPECT_EQ(bessel_roots(order, edge, std::nextafter(roots[k], 0)).size(), k);
      }
    }
  }
}

TEST(BesselRoots, AllOrdersAtOnceAgreeWithOneByOne) {
  const double limit = 700;
  for (const Edge edge : {Edge::dirichlet, Edge::neumann}) {
    const auto lists = bessel_roots_up_to(700, edge, limit);
    ASSERT_EQ(lists.size(), 701u);
    for (const int order : {0, 1, 2, 3, 50, 127, 128, 129, 300, 599, 690, 700}) {
      const std::vector<double> single = bessel_roots(order, edge, limit);
      const std::vector<double>& list = lists[static_cast<std::size_t>(order)];
      ASSERT_EQ(single.size(), list.size()) << to_string(edge) << " order " << order;
      for (std::size_t k = 0; k < list.size(); ++k) {
        const double ulp = std::nextafter(list[k], kInfinity) - list[k];
        EXPECT_LE(std::abs(single[k] - list[k]), 3 * ulp) << to_string(edge) << " order " << order << " index " << k;
      }
    }
  }
}

// Interlacing: n <= j'_{n,1} < j_{n,1} < j'_{n,2} < ... and j_{n,1} < j_{n+1,1} < j_{n,2} < ... (DLMF 10.21(i)).
TEST(BesselRoots, RootsOfNeighbouringOrdersAndEdgesInterlace) {
  const int max_order = 400;
  const double limit = 900;
  const auto dirichlet = bessel_roots_up_to(max_order, Edge::dirichlet, limit);
  auto neumann = bessel_roots_up_to(max_order, Edge::neumann, limit);
  for (std::size_t n = 1; n <= max_order; ++n) {
    const auto& j = dirichlet[n];
    const auto& slope = neumann[n];
    const auto& before = dirichlet[n - 1];
    ASSERT_TRUE(slope.size() == j.size() || slope.size() == j.size() + 1) << "order " << n;
    ASSERT_TRUE(before.size() == j.size() || before.size() == j.size() + 1) << "order " << n;
    ASSERT_GE(slope[0], static_cast<double>(n));
    for (std::size_t k = 0; k < j.size(); ++k) {
      ASSERT_LT(slope[k], j[k]) << "order " << n << " index " << k;
      ASSERT_LT(before[k], j[k]) << "order " << n << " index " << k;
      if (k + 1 < slope.size()) {
        ASSERT_LT(j[k], slope[k + 1]) << "order " << n << " index " << k;
      }
      if (k + 1 < before.size()) {
        ASSERT_LT(j[k], before[k + 1]) << "order " << n << " index " << k;
      }
    }
  }
}

// The index of a root is the count of half turns of the phase: J_n(x) behaves like cos(sqrt(x^2 - n^2) - n arccos(n/x)
// - pi/4) (Debye, DLMF 10.19.6), so each root tells its own index and none can be missing or double.
TEST(BesselRoots, ThePhaseCountsEveryRoot) {
  struct Case {
    int order;
    double limit;
  };
  for (const Case& one : {Case{0, 1e5}, Case{1, 1e4}, Case{6, 2e3}, Case{40, 3e4}, Case{333, 5e3}, Case{1000, 1e4},
                          Case{2500, 2e4}, Case{5000, 1e5}}) {
    for (const Edge edge : {Edge::dirichlet, Edge::neumann}) {
      const std::vector<double> roots = bessel_roots(one.order, edge, one.limit);
      const auto phase_of = [&](double x) {
        return std::sqrt((x - one.order) * (x + one.order)) - one.order * std::acos(one.order / x);
      };
      const double offset = edge == Edge::dirichlet ? 0.25 : 0.75;
      for (std::size_t k = 0; k < roots.size(); ++k) {
        if (roots[k] == 0) continue;
        ASSERT_NEAR(phase_of(roots[k]) / kPi + offset, static_cast<double>(k) + 1, 0.25)
            << to_string(edge) << " order " << one.order << " index " << k;
      }
      EXPECT_LT(std::abs(phase_of(one.limit) / kPi + offset - 0.5 - static_cast<double>(roots.size())), 0.6)
          << "roots before the limit, order " << one.order;
    }
  }
}

TEST(BesselNorm, ArgumentsOutsideTheRangeAreRefused) {
  expect_refused([] { bessel_norm(-1, Edge::dirichlet, 3); }, "order of the Bessel norm is -1", "0 to 5000");
  expect_refused([] { bessel_norm(5001, Edge::dirichlet, 6000); }, "order of the Bessel norm is 5001", "0 to 5000");
  for (const double root : {-2.4, 2e6, kNaN, kInfinity}) {
    expect_refused([&] { bessel_norm(0, Edge::neumann, root); }, "root of the Bessel norm",
                   "above the order 0, up to 1000000");
  }
  expect_refused([] { bessel_norm(0, Edge::dirichlet, 0); }, "root of the Bessel norm is 0",
                 "above the order 0, up to 1000000");
  expect_refused([] { bessel_norm(3, Edge::neumann, 0); }, "root of the Bessel norm is 0",
                 "above the order 3, up to 1000000");
}

TEST(BesselNorm, TheConstantHasNormOneHalf) { EXPECT_EQ(bessel_norm(0, Edge::neumann, 0), 0.5); }

TEST(BesselTable, ArgumentsOutsideTheRangeAreRefused) {
  expect_refused([] { BesselTable(-1, 3, 10); }, "first_order of the Bessel table is -1", "0 to 5100");
  expect_refused([] { BesselTable(5101, 5101, 10); }, "first_order of the Bessel table is 5101", "0 to 5100");
  expect_refused([] { BesselTable(4, 3, 10); }, "last_order of the Bessel table is 3", "first_order 4 to 5100");
  expect_refused([] { BesselTable(0, 5101, 10); }, "last_order of the Bessel table is 5101", "first_order 0 to 5100");
  for (const double x_max : {-1.0, 1.1e6, kNaN, kInfinity}) {
    expect_refused([&] { BesselTable(0, 3, x_max); }, "x_max of the Bessel table", "0 to 1000000");
  }
  const BesselTable table(3, 9, 50);
  for (const int order : {-1, 2, 10}) {
    expect_refused([&] { table.value(order, 1); }, "order asked of the Bessel table", "3 to 9");
    expect_refused([&] { table.derivative(order, 1); }, "order asked of the Bessel table", "3 to 9");
  }
  for (const double x : {-1e-300, 50.000001, kNaN, kInfinity}) {
    double out = 0;
    expect_refused([&] { table.value(3, x); }, "x asked of the Bessel table", "0 to 50");
    expect_refused([&] { table.derivative(3, x); }, "x asked of the Bessel table", "0 to 50");
    expect_refused([&] { table.values(3, &x, 1, &out); }, "x asked of the Bessel table", "0 to 50");
  }
}

TEST(BesselTable, RemembersItsRange) {
  const BesselTable table(3, 9, 50.25);
  EXPECT_EQ(table.first_order(), 3);
  EXPECT_EQ(table.last_order(), 9);
  EXPECT_EQ(table.x_max(), 50.25);
}

TEST(BesselTable, AtZero) {
  for (const double x_max : {0.0, 0.3, 7.0}) {
    const BesselTable table(0, 400, x_max);
    EXPECT_EQ(table.value(0, 0), 1.0);
    EXPECT_EQ(table.derivative(0, 0), 0.0);
    EXPECT_EQ(table.derivative(1, 0), 0.5);
    for (const int order : {1, 2, 3, 100, 400}) EXPECT_EQ(table.value(order, 0), 0.0);
    for (const int order : {2, 3, 100, 400}) EXPECT_EQ(table.derivative(order, 0), 0.0);
  }
}

TEST(BesselTable, UnderflowGivesCleanZeros) {
  const BesselTable table(0, 5100, 3000);
  for (const int order : {400, 1000, 5000, 5100}) {
    for (const double x : {1e-300, 1e-3, 0.4, 1.0, 2.5, 17.0, 30.0}) {
      EXPECT_EQ(table.value(order, x), 0.0) << order << " " << x;
      EXPECT_EQ(table.derivative(order, x), 0.0) << order << " " << x;
    }
  }
  // From the first positive value on the function grows without a gap up to the turning point.
  for (const int order : {90, 170, 340, 700, 2000}) {
    double before = 0;
    for (int i = 0; 0.01 * std::pow(1.01, i) < order; ++i) {
      const double x = 0.01 * std::pow(1.01, i);
      const double value = table.value(order, x);
      ASSERT_GE(value, before) << order << " " << x;
      ASSERT_TRUE(value > before || value < 1e-300) << order << " " << x;
      before = value;
    }
    EXPECT_GT(before, 1e-3);
  }
}

TEST(BesselTable, ManyValuesAreThoseOfOneByOneWhateverTheNeighbours) {
  const BesselTable table(0, 300, 12000);
  for (const int order : {0, 1, 2, 40, 299, 300}) {
    std::vector<double> x;
    x.reserve(3600);
    for (int i = 0; i < 3001; ++i) x.push_back(12000 * std::fmod(0.6180339887498949 * i * i, 1.0));
    for (int i = 0; i < 500; ++i) x.push_back(0.73 * i);
    for (int i = 0; i < 99; ++i) x.push_back(std::pow(10.0, -i / 10.0));
    std::vector<double> out(x.size(), kNaN);
    table.values(order, x.data(), x.size(), out.data());
    std::vector<double> single;
    single.reserve(x.size());
    for (const double one : x) single.push_back(table.value(order, one));
    EXPECT_TRUE(same_bits(out, single)) << order;
    std::vector<double> part(x.size(), kNaN);
    for (std::size_t begin = 0; begin < x.size(); begin += 7) {
      table.values(order, x.data() + begin, std::min<std::size_t>(7, x.size() - begin), part.data() + begin);
    }
    EXPECT_TRUE(same_bits(out, part)) << order;
  }
  table.values(0, nullptr, 0, nullptr);
}

TEST(BesselTable, ABandOfOrdersAgreesWithAllOrders) {
  const BesselTable all(0, 800, 1000);
  for (const int order : {0, 1, 5, 77, 400, 800}) {
    const BesselTable one(order, order, 1000);
    for (int i = 0; i < 1030; ++i) {
      const double x = 0.05 + 0.97 * i;
      const double amplitude = x > order ? std::sqrt(2 / (kPi * std::sqrt((x - order) * (x + order)))) : 0;
      const double scale = std::max(std::abs(all.value(order, x)), amplitude);
      ASSERT_LE(std::abs(one.value(order, x) - all.value(order, x)), 1e-14 * scale) << order << " " << x;
    }
  }
}

// The switch between power series, left node, nearest node and direct evaluation must not show.
TEST(BesselTable, NoStepsWhereTheMethodChanges) {
  const BesselTable table(0, 1000, 12000);
  for (const int order : {0, 1, 2, 10, 100, 1000}) {
    for (const double border : {0.5, 1.5, 1.5 * std::sqrt(order + 1.0), 0.7 * order, 10000.0, 10000.5, 127.0, 128.5}) {
      const double left = std::nextafter(border, 0);
      const double right = std::nextafter(border, kInfinity);
      const double at = table.value(order, border);
      const double rise = std::abs(table.derivative(order, border)) * (right - left);
      const double amplitude = border > order ? std::sqrt(2 / (kPi * border)) : std::abs(at);
      EXPECT_NEAR(table.value(order, left), at, rise + 1e-14 * amplitude) << order << " " << border;
      EXPECT_NEAR(table.value(order, right), at, rise + 1e-14 * amplitude) << order << " " << border;
    }
  }
}

// J_0(x)^2 + 2 sum J_n(x)^2 = 1 (DLMF 10.23.3), J_{n-1} + J_{n+1} = (2n/x) J_n, J_{n-1} - J_{n+1} = 2 J_n'
// (DLMF 10.6.1).
TEST(BesselTable, SumOfSquaresAndRecurrences) {
  const BesselTable table(0, 900, 640);
  for (const double x : {0.2, 0.9, 3.4, 17.499, 17.501, 127.96, 128.4, 411.3, 640.0}) {
    double sum = -std::pow(table.value(0, x), 2);
    for (int n = 0; n <= 900; ++n) sum += 2 * std::pow(table.value(n, x), 2);
    EXPECT_NEAR(sum, 1, 1e-14) << x;
    for (const int n : {1, 2, 9, 60, 127, 400, 700}) {
      const double below = table.value(n - 1, x);
      const double above = table.value(n + 1, x);
      EXPECT_NEAR(below + above, 2 * n / x * table.value(n, x), 1e-14 * (std::abs(below) + std::abs(above)))
          << n << " " << x;
      EXPECT_NEAR(below - above, 2 * table.derivative(n, x), 1e-14 * (std::abs(below) + std::abs(above)))
          << n << " " << x;
    }
    EXPECT_NEAR(table.derivative(0, x), -table.value(1, x), 1e-15) << x;
  }
}

TEST(BesselTable, TheEndsOfItsRangeWork) {
  const BesselTable wide(0, 1, 1e6);
  // J_0(x) is near sqrt(2 / (pi x)) (cos(x - pi/4) + sin(x - pi/4) / (8x)), the next term 1e-13 smaller (DLMF 10.17.3).
  const double x = 1e6;
  const double phase = std::fmod(x, 2 * kPi) - kPi / 4;
  EXPECT_NEAR(wide.value(0, x), std::sqrt(2 / (kPi * x)) * (std::cos(phase) + std::sin(phase) / (8 * x)), 1e-12);
  const BesselTable high(5100, 5100, 6000);
  EXPECT_GT(std::abs(high.value(5100, 5100.0)), 0.02);
}

TEST(BesselTable, OneTableServesManyThreads) {
  const BesselTable table(0, 200, 500);
  std::vector<double> x;
  x.reserve(20000);
  for (int i = 0; i < 20000; ++i) x.push_back(500 * std::fmod(0.6180339887498949 * i, 1.0));
  const auto evaluate = [&](std::vector<double>* out) {
    out->clear();
    std::vector<double> part(x.size());
    for (const int order : {0, 3, 90, 200}) {
      table.values(order, x.data(), x.size(), part.data());
      out->insert(out->end(), part.begin(), part.end());
      out->push_back(table.derivative(order, x[static_cast<std::size_t>(order)]));
    }
    const std::vector<double> roots = bessel_roots(5, Edge::neumann, 300);
    out->insert(out->end(), roots.begin(), roots.end());
    out->push_back(bessel_norm(5, Edge::neumann, roots[3]));
    out->push_back(bessel_i0_scaled(12.5));
  };
  std::vector<double> alone;
  evaluate(&alone);
  std::vector<std::vector<double>> together(4);
  std::vector<std::thread> threads;
  threads.reserve(together.size());
  for (auto& out : together) threads.emplace_back(evaluate, &out);
  for (auto& thread : threads) thread.join();
  for (const auto& out : together) EXPECT_TRUE(same_bits(out, alone));
}

TEST(BesselI0, EdgeCases) {
  EXPECT_EQ(bessel_i0_scaled(0), 1.0);
  EXPECT_EQ(bessel_i0_scaled(-3.5), bessel_i0_scaled(3.5));
  EXPECT_GT(bessel_i0_scaled(std::numeric_limits<double>::max()), 0.0);
  for (const double x : {kNaN, kInfinity, -kInfinity}) {
    expect_refused([&] { bessel_i0_scaled(x); }, "argument of the scaled I_0", "any finite number");
  }
}

}  // namespace
}  // namespace tambour
