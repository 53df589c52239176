// The N-fold test on invented images: calibration under noise, power, independence of threads and batches.
#include <gtest/gtest.h>

#include <map>

#include "support/scenes.hpp"
#include "tambour/error.hpp"
#include "tambour/stack_study.hpp"

namespace tambour {
namespace {

using testing::RingStack;

constexpr double radius = 24;
constexpr std::ptrdiff_t side = 64;

StackStudyOptions options() {
  StackStudyOptions o;
  o.geometry.radius = radius;
  return o;
}

/// One plan for all tests: its null law takes a moment.
const StackStudyPlan& plan() {
  static ThreadPool pool(2);
  static const StackStudyPlan the_plan(options(), side, side, pool);
  return the_plan;
}

std::vector<ImageStudy> study(const ImageSource& source) {
  ThreadPool pool(2);
  NoProgress progress;
  std::vector<ImageStudy> all;
  plan().run(source, {}, {}, pool, progress,
             [&](const StudyBatch& batch) { all.insert(all.end(), batch.images.begin(), batch.images.end()); });
  return all;
}

double share(const std::vector<ImageStudy>& images, const std::function<bool(const SymmetryEvidence&)>& wanted) {
  double count = 0;
  for (const ImageStudy& image : images) count += wanted(*image.evidence) ? 1 : 0;
  return count / static_cast<double>(images.size());
}

// The bands are those of a binomial share of 2000 images around 1 % and 5 %, widened by half for the error of the drawn
// law.
TEST(SymmetryTest, PureNoiseGivesItsNominalShareOfSmallP) {
  const auto images = study(RingStack(2000, side, radius, 0, 1, 1));
  const double at_one = share(images, [](const auto& e) { return e.p_noise < 0.01; });
  const double at_five = share(images, [](const auto& e) { return e.p_noise < 0.05; });
  EXPECT_GT(at_one, 0.004);
  EXPECT_LT(at_one, 0.020);
  EXPECT_GT(at_five, 0.020);
  EXPECT_LT(at_five, 0.075);
}

struct Case {
  int fold;
  double snr;
  double least_right;
};

class Power : public ::testing::TestWithParam<Case> {};

// Shares measured on 300 images of this generator, less three standard errors.
TEST_P(Power, NamesTheFold) {
  const Case& c = GetParam();
  const auto images = study(RingStack(150, side, radius, c.fold, c.snr, 100 + static_cast<unsigned>(c.fold)));
  const double right =
      share(images, [&](const auto& e) { return e.fold == c.fold && e.verdict == Verdict::best_supported; });
  EXPECT_GE(right, c.least_right) << c.fold << "-fold at SNR " << c.snr;
}

INSTANTIATE_TEST_SUITE_P(Folds, Power,
                         ::testing::Values(Case{3, 0.5, 0.95}, Case{5, 0.5, 0.95}, Case{6, 0.5, 0.95},
                                           Case{7, 0.5, 0.95}, Case{12, 1, 0.75}, Case{13, 1, 0.6}));

TEST(SymmetryTest, BitsDoNotDependOnThreadsOrBatch) {
  const RingStack stack(20, side, radius, 6, 0.5, 5);
  const auto run = [&](int threads, std::size_t batch) {
    StackStudyOptions o = options();
    o.batch = batch;
    o.symmetry.draws = 2000;
    ThreadPool pool(threads);
    NoProgress progress;
    std::vector<double> bits;
    StackStudyPlan(o, side, side, pool).run(stack, {}, {}, pool, progress, [&](const StudyBatch& b) {
      for (const ImageStudy& image : b.images) {
        for (const double value : {image.centre.centre.x, image.centre.centre.y, image.centre.var_x, image.noise_sd,
                                   image.evidence->ln_bf, image.evidence->p_noise, image.evidence->visibility})
          bits.push_back(value);
      }
    });
    return bits;
  };
  const auto one = run(1, 20);
  EXPECT_EQ(one, run(3, 7));
  EXPECT_EQ(one, run(2, 1));
}

TEST(SymmetryTest, AnglesOfOneKindDifferByTheTruth) {
  const RingStack stack(40, side, radius, 6, 2, 9);
  ThreadPool pool(2);
  NoProgress progress;
  AngleReference reference(plan().basis(), 6);
  std::vector<std::pair<std::vector<std::complex<double>>, NoiseSpectrum>> kept;
  plan().run(stack, {}, {}, pool, progress, [&](const StudyBatch& batch) {
    for (std::size_t i = 0; i < batch.images.size(); ++i) {
      const auto* row = batch.coefficients.row(static_cast<std::ptrdiff_t>(i));
      kept.emplace_back(std::vector(row, row + plan().basis().size()), batch.images[i].noise);
      reference.add(kept.back().first, kept.back().second);
    }
  });
  const auto weights = reference.weights();
  double zero = 0, chi = 0;
  std::vector<double> difference;
  for (std::size_t i = 0; i < kept.size(); ++i) {
    const PatternAngle found = pattern_angle(plan().basis(), 6, kept[i].first, weights, kept[i].second);
    EXPECT_GE(found.angle, 0);
    EXPECT_LT(found.angle, 60);
    double d = std::remainder(found.angle - stack.truth[i].turn * 180 / testing::pi - zero, 60);
    if (i == 0) {
      zero = d;
      d = 0;
    }
    difference.push_back(d);
    chi += d * d / (found.se * found.se);
  }
  // The first image's own error shifts all differences: twice the variance, and the centre's error adds to it.
  EXPECT_LT(chi / static_cast<double>(kept.size()), 6);
  for (const double d : difference) EXPECT_LT(std::abs(d), 8);
}

TEST(SymmetryTest, ListsEveryProblemOfItsOptions) {
  SymmetryOptions o;
  o.first_fold = 1;
  o.alpha = 2;
  o.draws = 3;
  EXPECT_EQ(o.problems().size(), 3U);
  SerialExecutor serial;
  EXPECT_THROW(SymmetryTest(DiskBasis({.radius = 24, .bandlimit = 0.8}), o, serial), Error);
  o = {};
  o.last_fold = 100;  // above the highest order of this basis
  EXPECT_THROW(SymmetryTest(DiskBasis({.radius = 24, .bandlimit = 0.8}), o, serial), Error);
}

}  // namespace
}  // namespace tambour
