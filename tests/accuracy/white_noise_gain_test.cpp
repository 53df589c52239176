// v_nk against what white noise really does: the analysis of every pixel alone gives the exact variance of a_nk.
#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <complex>
#include <ostream>
#include <utility>
#include <vector>

#include "support/disk_run.hpp"

namespace tambour {

/// Prints a geometry in the name of its test.
void PrintTo(const DiskGeometry& g, std::ostream* out) {
  *out << "radius " << g.radius << ", " << to_string(g.edge) << ", bandlimit " << g.bandlimit;
}

namespace {

using testing::analyse;
using testing::disk_plan;

/// sum over the pixels of |a_nk of that pixel alone|^2 = E|a_nk|^2 of white noise of variance 1 in such a frame.
std::vector<double> variances(int side, const DiskGeometry& geometry) {
  const auto plan = disk_plan<float>(side, side, geometry);
  const double middle = (side - 1) / 2.0;
  const std::vector<Centre> centres(side, {middle + 0.3, middle - 0.1});
  std::vector<double> sum(plan.basis().size());
  std::vector<float> images(static_cast<std::size_t>(side) * side * side);
  for (int row = 0; row < side; ++row) {  // a batch of `side` images, one bright pixel each
    std::fill(images.begin(), images.end(), 0.0F);
    for (int x = 0; x < side; ++x) images[(static_cast<std::size_t>(x) * side + row) * side + x] = 1;
    const auto a = analyse(plan, images, centres);
    for (std::size_t i = 0; i < a.size(); ++i) sum[i % sum.size()] += std::norm(a[i]);
  }
  return sum;
}

class WhiteNoiseGain : public ::testing::TestWithParam<DiskGeometry> {};

// The cosine modes of a frame of N pixels end at p = N - 1, half a step short of the band's edge, so that the variance
// approaches v_nk as 1 / N; two frames extrapolate to the limit.
TEST_P(WhiteNoiseGain, IsTheVarianceOfWhiteNoiseInAWideFrame) {
  const DiskBasis basis(GetParam());
  const auto narrow = variances(48, GetParam()), wide = variances(96, GetParam());
  double worst = 0, least = 1;
  for (std::size_t i = 0; i < wide.size(); ++i) {
    const double gain = basis.terms()[i].white_noise_gain;
    worst = std::max(worst, std::abs(2 * wide[i] - narrow[i] - gain));
    least = std::min(least, gain);
    EXPECT_GT(gain, wide[i] - 1e-5);
  }
  EXPECT_LE(worst, 1e-3);
  EXPECT_LT(least, 0.985);  // otherwise nothing was tested
}

INSTANTIATE_TEST_SUITE_P(Geometries, WhiteNoiseGain,
                         ::testing::Values(DiskGeometry{8, Edge::dirichlet, 0.9}, DiskGeometry{8, Edge::neumann, 0.9}));

// Dense experiments at bandlimit 0.8, radius 12 to 24: Neumann mean .96 to .98, least about .88; Dirichlet mean .998.
TEST(WhiteNoiseGainItself, IsOfTheKnownSize) {
  const auto mean_and_least = [](double radius, Edge edge) {
    const DiskBasis basis({radius, edge, 0.8});
    double sum = 0, least = 1;
    for (const Term& term : basis.terms()) {
      sum += term.white_noise_gain;
      least = std::min(least, term.white_noise_gain);
    }
    return std::pair(sum / static_cast<double>(basis.size()), least);
  };
  EXPECT_NEAR(mean_and_least(12, Edge::neumann).first, 0.96, 0.005);
  EXPECT_NEAR(mean_and_least(24, Edge::neumann).first, 0.98, 0.005);
  EXPECT_NEAR(mean_and_least(24, Edge::neumann).second, 0.88, 0.01);
  EXPECT_NEAR(mean_and_least(24, Edge::dirichlet).first, 0.998, 0.001);
}

}  // namespace
}  // namespace tambour
