// ln BF against its definition: the marginal likelihoods integrated numerically over each shell's unknown scale.
#include <gtest/gtest.h>

#include <boost/math/quadrature/gauss_kronrod.hpp>
#include <cmath>
#include <random>

#include "study/evidence.hpp"
#include "tambour/noise.hpp"

namespace tambour {
namespace {

/// ln integral dv/v prod over cells of v_c^{-d_c/2} exp(-E_c / (2 v_c)), v_c = v (1 + t) in the orders that belong to
/// the fold, v elsewhere: the likelihood of chi-squared energies E_c with d_c degrees of freedom, without factors that
/// both models share.
double ln_marginal(double inside, double degrees_inside, double outside, double degrees_outside, double t) {
  const auto ln_integrand = [&](double ln_v) {
    const double v = std::exp(ln_v);
    return -degrees_inside / 2 * std::log(v * (1 + t)) - inside / (2 * v * (1 + t)) -
           degrees_outside / 2 * std::log(v) - outside / (2 * v);
  };
  const double ln_peak = std::log((inside / (1 + t) + outside) / (degrees_inside + degrees_outside));
  const double largest = ln_integrand(ln_peak);
  const double integral = boost::math::quadrature::gauss_kronrod<double, 61>::integrate(
      [&](double ln_v) { return std::exp(ln_integrand(ln_v) - largest); }, ln_peak - 8, ln_peak + 8, 12, 1e-13);
  return largest + std::log(integral);
}

TEST(Evidence, IsTheRatioOfMarginalLikelihoods) {
  const DiskBasis basis({.radius = 12, .bandlimit = 0.8});
  const Shells shells = make_shells(basis);
  const int fold = 5;
  const study::Evidence evidence(shells, basis.root_limit(), fold, fold, 1);

  std::mt19937_64 engine(3);
  std::vector<double> energies(shells.size() * evidence.orders(), 0.0);
  for (std::size_t j = 0; j < shells.size(); ++j)
    for (int n = 0; n < evidence.orders(); ++n)
      if (const double d = shells.degrees_of_freedom[j][n]; d > 0)
        energies[j * evidence.orders() + n] = std::gamma_distribution<double>(d / 2, n % fold == 0 ? 8 : 2)(engine);
  double computed = 0;
  evidence.ln_bayes_factors(energies, {&computed, 1});

  // The grid of amplitudes and widths as docs/mathematics.md states it.
  std::vector<double> ln_bf;
  for (int i = 0; i < 10; ++i) {
    const double amplitude = 0.125 * std::pow(256 / 0.125, i / 9.0);
    for (const double width : {0.2, 0.3, 0.45, 0.7, 1.2}) {
      double sum = 0;
      for (std::size_t j = 0; j < shells.size(); ++j) {
        double inside = 0, outside = 0, degrees_inside = 0, degrees_outside = 0;
        for (int n = 0; n < evidence.orders(); ++n) {
          (n % fold == 0 ? inside : outside) += energies[j * evidence.orders() + n];
          (n % fold == 0 ? degrees_inside : degrees_outside) += shells.degrees_of_freedom[j][n];
        }
        const double x = shells.mean_root[j] / (width * basis.root_limit());
        const double t = amplitude * std::exp(-x * x / 2);
        sum += ln_marginal(inside, degrees_inside, outside, degrees_outside, t) -
               ln_marginal(inside, degrees_inside, outside, degrees_outside, 0);
      }
      ln_bf.push_back(sum);
    }
  }
  double mean = 0;
  for (const double value : ln_bf) mean += std::exp(value - ln_bf.front());
  const double expected = ln_bf.front() + std::log(mean / static_cast<double>(ln_bf.size()));
  EXPECT_NEAR(computed, expected, 1e-9 * std::abs(expected));
}

TEST(Shells, HoldEnoughAndCoverEveryTermOfOrderTwoAndAbove) {
  for (const double radius : {6.0, 12.0, 24.0, 48.0}) {
    const DiskBasis basis({.radius = radius, .bandlimit = 0.8});
    const Shells shells = make_shells(basis);
    double total = 0, expected = 0;
    for (std::size_t j = 0; j < shells.size(); ++j) {
      total += shells.total(j);
      EXPECT_GE(shells.total(j), 24) << "shell " << j << " at radius " << radius;
    }
    for (const Term& term : basis.terms()) expected += term.angular_order >= 2 ? 2 : 0;
    EXPECT_EQ(total, expected);
  }
}

}  // namespace
}  // namespace tambour
