// Running plans: batches, threads, views, tolerances, bad images and wrong arguments.
#include "tambour/disk_transform.hpp"

#include <gtest/gtest.h>

#include <cmath>
#include <complex>
#include <limits>
#include <string>
#include <thread>
#include <type_traits>
#include <utility>
#include <vector>

#include "support/disk_run.hpp"
#include "tambour/error.hpp"

namespace tambour {
namespace {

using testing::analyse;
using testing::disk_plan;
using testing::relative_difference;
using testing::synthesise;
using testing::white_noise;

constexpr int rows = 40, columns = 44;
constexpr std::size_t pixels = rows * columns;
const DiskGeometry geometry{17.5, Edge::neumann, 0.9};

std::vector<Centre> some_centres(std::size_t count) {
  std::vector<Centre> centres;
  for (std::size_t i = 0; i < count; ++i)
    centres.push_back({21.5 + 0.31 * static_cast<double>(i % 5), 19.5 + 0.17 * static_cast<double>(i % 3)});
  return centres;
}

template <class T>
class DiskTransformRuns : public ::testing::Test {};
using Precisions = ::testing::Types<float, double>;
TYPED_TEST_SUITE(DiskTransformRuns, Precisions);

TYPED_TEST(DiskTransformRuns, BatchSizeAndThreadsDoNotChangeABit) {
  using T = TypeParam;
  const auto plan = disk_plan<T>(rows, columns, geometry);
  const auto terms = static_cast<std::ptrdiff_t>(plan.basis().size());
  const std::size_t count = 19;
  const auto images = white_noise<T>(count * pixels, 1);
  const auto centres = some_centres(count);
  const auto together = analyse(plan, images, centres);
  const auto drawn_together = synthesise(plan, together, centres);

  std::vector<std::complex<T>> alone;
  std::vector<T> drawn_alone;
  for (std::size_t i = 0; i < count; ++i) {
    const auto a = analyse(plan, std::vector<T>(&images[i * pixels], &images[i * pixels] + pixels), {centres[i]});
    alone.insert(alone.end(), a.begin(), a.end());
    const auto image = synthesise(plan, a, {centres[i]});
    drawn_alone.insert(drawn_alone.end(), image.begin(), image.end());
  }
  EXPECT_EQ(alone, together);
  EXPECT_EQ(drawn_alone, drawn_together);

  for (const int threads : {1, 2, 5}) {
    ThreadPool pool(threads);
    std::vector<std::complex<T>> spread(together.size());
    std::vector<ImageStatus> statuses(count);
    plan.analyse(StackView<const T>(images.data(), count, rows, columns), centres, {spread.data(), count, terms},
                 statuses, pool);
    EXPECT_EQ(spread, together) << threads << " threads";
    std::vector<T> drawn(images.size());
    plan.synthesise(MatrixView<const std::complex<T>>(spread.data(), count, terms), centres,
                    {drawn.data(), count, rows, columns}, pool);
    EXPECT_EQ(drawn, drawn_together) << threads << " threads";
  }
}

TYPED_TEST(DiskTransformRuns, OnePlanRunsInSeveralThreadsAtOnce) {
  using T = TypeParam;
  const auto plan = disk_plan<T>(rows, columns, geometry);
  constexpr std::size_t threads = 4, rounds = 5;
  const auto images = white_noise<T>(threads * pixels, 2);
  std::vector<std::vector<T>> own;
  std::vector<std::vector<std::complex<T>>> expected;
  for (std::size_t t = 0; t < threads; ++t) {
    own.emplace_back(&images[t * pixels], &images[t * pixels] + pixels);
    expected.push_back(analyse(plan, own[t], {{21.2, 19.9}}));
  }
  std::vector<int> equal(threads, 0);
  std::vector<std::thread> running;
  for (std::size_t t = 0; t < threads; ++t)
    running.emplace_back([&, t] {
      for (std::size_t round = 0; round < rounds; ++round)
        equal[t] += analyse(plan, own[t], {{21.2, 19.9}}) == expected[t];
    });
  for (auto& thread : running) thread.join();
  EXPECT_EQ(equal, std::vector<int>(threads, rounds));
}

TYPED_TEST(DiskTransformRuns, WorkspacesServeEveryCopyOfAPlanAndKeepNothing) {
  using T = TypeParam;
  auto plan = disk_plan<T>(rows, columns, geometry);
  const auto terms = static_cast<std::ptrdiff_t>(plan.basis().size());
  const auto first = white_noise<T>(pixels, 3), second = white_noise<T>(pixels, 4);
  const std::vector<Centre> off{{21.9, 19.1}};
  const auto expected = analyse(plan, second, {});
  auto workspace = plan.make_workspace();
  const DiskTransform<T> copy = plan;
  plan = disk_plan<T>(24, 24, {9, Edge::dirichlet, 0.5});  // the copy lives on alone

  std::vector<std::complex<T>> a(expected.size());
  std::vector<ImageStatus> status(1);
  copy.analyse(StackView<const T>(first.data(), 1, rows, columns), off, {a.data(), 1, terms}, status, workspace);
  std::vector<T> image(pixels);
  copy.synthesise(MatrixView<const std::complex<T>>(a.data(), 1, terms), off, {image.data(), 1, rows, columns},
                  workspace);
  typename DiskTransform<T>::Workspace moved = std::move(workspace);
  copy.analyse(StackView<const T>(second.data(), 1, rows, columns), {}, {a.data(), 1, terms}, status, moved);
  EXPECT_EQ(a, expected);
}

TYPED_TEST(DiskTransformRuns, ViewsMayHaveStrides) {
  using T = TypeParam;
  const auto plan = disk_plan<T>(rows, columns, geometry);
  const auto terms = static_cast<std::ptrdiff_t>(plan.basis().size());
  const std::ptrdiff_t count = 3, row_stride = columns + 5, image_stride = rows * row_stride + 11;
  const auto images = white_noise<T>(count * pixels, 5);
  const auto centres = some_centres(count);
  const auto expected = analyse(plan, images, centres);
  const auto drawn_expected = synthesise(plan, expected, centres);

  const T gap = 77;
  std::vector<T> spaced(count * image_stride, gap);
  for (std::ptrdiff_t i = 0; i < count; ++i)
    for (int y = 0; y < rows; ++y)
      for (int x = 0; x < columns; ++x)
        spaced[i * image_stride + y * row_stride + x] = images[(i * rows + y) * columns + x];
  const std::ptrdiff_t term_stride = terms + 3;
  const std::complex<T> mark(-1, -2);
  std::vector<std::complex<T>> a(count * term_stride, mark);
  std::vector<ImageStatus> statuses(count);
  auto workspace = plan.make_workspace();
  plan.analyse(StackView<const T>(spaced.data(), count, rows, columns, image_stride, row_stride), centres,
               {a.data(), count, terms, term_stride}, statuses, workspace);
  for (std::ptrdiff_t i = 0; i < count; ++i)
    for (std::ptrdiff_t k = 0; k < term_stride; ++k)
      ASSERT_EQ(a[i * term_stride + k], k < terms ? expected[i * terms + k] : mark) << i << ", " << k;

  std::fill(spaced.begin(), spaced.end(), gap);
  plan.synthesise(MatrixView<const std::complex<T>>(a.data(), count, terms, term_stride), centres,
                  {spaced.data(), count, rows, columns, image_stride, row_stride}, workspace);
  for (std::ptrdiff_t i = 0; i < count; ++i)
    for (std::ptrdiff_t at = 0; at < image_stride; ++at) {
      const std::ptrdiff_t y = at / row_stride, x = at % row_stride;
      const bool pixel = y < rows && x < columns;
      ASSERT_EQ(spaced[i * image_stride + at], pixel ? drawn_expected[(i * rows + y) * columns + x] : gap);
    }
}

TYPED_TEST(DiskTransformRuns, EveryToleranceIsKept) {
  using T = TypeParam;
  const std::vector<double> tolerances = std::is_same_v<T, float>
                                             ? std::vector<double>{1e-2, 1e-3, 1e-4, 1e-5, 1e-6}
                                             : std::vector<double>{1e-2, 1e-4, 1e-6, 1e-8, 1e-10, 1e-11, 3e-7};
  struct Size {
    int side;
    double radius;
    Edge edge;
  };
  for (const Size& size : {Size{36, 16, Edge::dirichlet}, {64, 30, Edge::neumann}, {140, 40, Edge::dirichlet}}) {
    const DiskGeometry disk{size.radius, size.edge, 0.9};
    const Centre centre{size.side / 2 - 0.3, size.side / 2 + 0.2};
    const auto exact_plan = disk_plan<double>(size.side, size.side, disk, 1e-12);
    const auto image = white_noise<double>(size.side * size.side, 6);
    const auto exact = analyse(exact_plan, image, {centre});
    const std::vector<std::complex<T>> rounded(exact.begin(), exact.end());
    const auto drawn =
        synthesise(exact_plan, std::vector<std::complex<double>>(rounded.begin(), rounded.end()), {centre});
    for (const double tolerance : tolerances) {
      const auto plan = disk_plan<T>(size.side, size.side, disk, tolerance);
      EXPECT_EQ(plan.options().tolerance, tolerance);
      const auto a = analyse(plan, std::vector<T>(image.begin(), image.end()), {centre});
      EXPECT_LE(relative_difference(a, exact), tolerance) << size.side << " px";
      const auto redrawn = synthesise(plan, rounded, {centre});
      double worst = 0, largest = 0;
      for (std::size_t i = 0; i < drawn.size(); ++i) {
        worst = std::max(worst, std::abs(redrawn[i] - drawn[i]));
        largest = std::max(largest, std::abs(drawn[i]));
      }
      EXPECT_LE(worst, tolerance * largest) << size.side << " px, tolerance " << tolerance;
    }
  }
  EXPECT_EQ((disk_plan<T>(rows, columns, geometry).options().tolerance), (std::is_same_v<T, float> ? 1e-6 : 1e-12));
}

TYPED_TEST(DiskTransformRuns, OneBadImageGetsItsReasonAndZeros) {
  using T = TypeParam;
  const auto plan = disk_plan<T>(rows, columns, geometry);
  const std::size_t count = 7, terms = plan.basis().size();
  auto images = white_noise<T>(count * pixels, 7);
  auto centres = some_centres(count);
  const auto expected = analyse(plan, images, centres);
  images[1 * pixels + 3 * columns + 8] = std::numeric_limits<T>::quiet_NaN();
  images[2 * pixels] = -std::numeric_limits<T>::infinity();
  centres[3] = {16.9, 19.5};  // 16.9 - 17.5 < -0.5
  centres[4] = {21.5, 22.1};  // 22.1 + 17.5 > 39.5
  centres[5] = {std::numeric_limits<double>::quiet_NaN(), 19.5};
  std::vector<ImageStatus> statuses(count, ImageStatus{"left from before"});
  const auto a = analyse(plan, images, centres, &statuses);

  EXPECT_EQ(statuses[0].text(), "ok");
  EXPECT_NE(statuses[1].text().find("x 8, y 3"), std::string::npos) << statuses[1].text();
  EXPECT_NE(statuses[1].text().find("nan"), std::string::npos) << statuses[1].text();
  EXPECT_NE(statuses[2].text().find("inf"), std::string::npos) << statuses[2].text();
  for (const int i : {3, 4}) {
    EXPECT_NE(statuses[i].text().find("leaves the frame of 44 x 40 px"), std::string::npos) << statuses[i].text();
    EXPECT_NE(statuses[i].text().find("17.5"), std::string::npos) << statuses[i].text();
  }
  EXPECT_NE(statuses[5].text().find("not finite"), std::string::npos) << statuses[5].text();
  EXPECT_EQ(statuses[6].text(), "ok");
  for (std::size_t i = 0; i < count; ++i)
    for (std::size_t k = 0; k < terms; ++k)
      ASSERT_EQ(a[i * terms + k], i == 0 || i == 6 ? expected[i * terms + k] : std::complex<T>()) << "image " << i;
}

TYPED_TEST(DiskTransformRuns, SynthesisAboutNoCentreIsDark) {
  using T = TypeParam;
  const auto plan = disk_plan<T>(rows, columns, geometry);
  const std::vector<std::complex<T>> a(plan.basis().size(), std::complex<T>(1, 1));
  EXPECT_EQ(synthesise(plan, a, {{std::numeric_limits<double>::quiet_NaN(), 19}}), std::vector<T>(pixels));
  EXPECT_EQ(synthesise(plan, a, {{1e300, -std::numeric_limits<double>::infinity()}}), std::vector<T>(pixels));
}

TEST(DiskInFrame, TouchingIsAllowed) {
  EXPECT_TRUE(disk_in_frame({17, 19.5}, 17.5, 40, 44).ok());
  EXPECT_TRUE(disk_in_frame({26, 19.5}, 17.5, 40, 44).ok());
  EXPECT_TRUE(disk_in_frame({21.5, 19.5}, 20, 40, 44).ok());
  EXPECT_FALSE(disk_in_frame({16.99, 19.5}, 17.5, 40, 44).ok());
  EXPECT_FALSE(disk_in_frame({26.01, 19.5}, 17.5, 40, 44).ok());
  EXPECT_FALSE(disk_in_frame({21.5, 16.99}, 17.5, 40, 44).ok());
  EXPECT_FALSE(disk_in_frame({21.5, 22.01}, 17.5, 40, 44).ok());
}

/// The message of the Error(invalid_argument) that `call` throws.
template <class Call>
std::string refusal(const Call& call) {
  try {
    call();
  } catch (const Error& error) {
    EXPECT_EQ(error.code(), ErrorCode::invalid_argument);
    return error.what();
  }
  return "nothing was thrown";
}

void expect_words(const std::string& message, const std::vector<std::string>& words) {
  for (const auto& word : words) EXPECT_NE(message.find(word), std::string::npos) << message << " lacks " << word;
}

TYPED_TEST(DiskTransformRuns, WrongShapesAreRefused) {
  using T = TypeParam;
  const auto plan = disk_plan<T>(rows, columns, geometry);
  const auto terms = static_cast<std::ptrdiff_t>(plan.basis().size());
  std::vector<T> images(2 * pixels);
  std::vector<std::complex<T>> a(2 * terms + 2);
  std::vector<ImageStatus> statuses(2);
  auto workspace = plan.make_workspace();
  SerialExecutor serial;
  const auto run = [&](std::ptrdiff_t r, std::ptrdiff_t c, std::size_t centres, std::ptrdiff_t coefficient_rows,
                       std::ptrdiff_t coefficient_columns, std::size_t status_count) {
    const std::vector<Centre> own(centres, Centre{21, 19});
    const StackView<const T> in(images.data(), 2, r, c);
    const MatrixView<std::complex<T>> out(a.data(), coefficient_rows, coefficient_columns);
    const auto span = std::span(statuses).first(status_count);
    const std::string message = refusal([&] { plan.analyse(in, own, out, span, workspace); });
    EXPECT_EQ(refusal([&] { plan.analyse(in, own, out, span, serial); }), message);
    return message;
  };
  expect_words(run(39, columns, 2, 2, terms, 2), {"rows", "39", "40"});
  expect_words(run(rows, 43, 2, 2, terms, 2), {"columns", "43", "44"});
  expect_words(run(rows, columns, 1, 2, terms, 2), {"centres", "1", "2"});
  expect_words(run(rows, columns, 2, 1, terms, 2), {"coefficients", "1", "2"});
  expect_words(run(rows, columns, 2, 2, terms + 1, 2),
               {"coefficients", std::to_string(terms + 1), std::to_string(terms)});
  expect_words(run(rows, columns, 0, 2, terms, 1), {"statuses", "1", "2"});

  const MatrixView<const std::complex<T>> in(a.data(), 2, terms - 1);
  const StackView<T> out(images.data(), 2, rows, columns);
  expect_words(refusal([&] { plan.synthesise(in, {}, out, workspace); }), {"coefficients", std::to_string(terms - 1)});
  expect_words(refusal([&] { plan.synthesise(in, {}, out, serial); }), {"coefficients", std::to_string(terms - 1)});
}

TEST(DiskTransformOptionsCheck, ListsEverythingThatIsWrong) {
  DiskTransformOptions options;
  options.geometry = {3.5, Edge::dirichlet, 1.2};
  options.rows = 7;
  options.columns = 20000;
  options.tolerance = 0.5;
  EXPECT_EQ(options.problems().size(), 5U);
  expect_words(refusal([&] { DiskTransform<double> plan(options); }),
               {"radius is 3.5", "bandlimit is 1.2", "rows is 7", "columns is 20000", "tolerance is 0.5"});
  expect_words(refusal([] { disk_plan<float>(40, 40, {20.5, Edge::dirichlet, 0.9}); }), {"radius is 20.5", "20 px"});
  expect_words(refusal([] { disk_plan<float>(40, 40, {15, Edge::dirichlet, 0.9}, 1e-9); }), {"tolerance", "1e-09"});
  expect_words(refusal([] { disk_plan<double>(40, 40, {15, Edge::dirichlet, 0.9}, 1e-13); }), {"tolerance", "1e-13"});
  expect_words(refusal([] { disk_plan<double>(40, 40, {std::nan(""), Edge::dirichlet, 0.9}); }), {"radius is nan"});
  expect_words(refusal([] { DiskBasis({4, Edge::dirichlet, 0.1}); }), {"no term"});
}

TEST(DiskBasisTerms, AreSortedAndIndexed) {
  for (const Edge edge : {Edge::dirichlet, Edge::neumann}) {
    const DiskBasis basis({20, edge, 0.9});
    EXPECT_EQ(basis.order_begin(0), 0U);
    EXPECT_EQ(basis.order_begin(basis.max_order() + 1), basis.size());
    for (int n = 0; n <= basis.max_order(); ++n) {
      ASSERT_FALSE(basis.order(n).empty());
      double before = -1;
      int k = 0;
      for (const Term& term : basis.order(n)) {
        EXPECT_EQ(term.angular_order, n);
        EXPECT_EQ(term.radial_index, ++k);
        EXPECT_GT(term.root, before);
        EXPECT_LE(term.root, basis.root_limit());
        EXPECT_GT(term.normalisation, 0);
        before = term.root;
      }
      // nothing under the limit is missing
      EXPECT_EQ(bessel_roots(n, edge, basis.root_limit()).size(), basis.order(n).size());
    }
    EXPECT_TRUE(bessel_roots(basis.max_order() + 1, edge, basis.root_limit()).empty());
    EXPECT_EQ(basis.terms()[0].root == 0, edge == Edge::neumann);
  }
  const DiskBasis basis({20, Edge::neumann, 0.9});
  expect_words(refusal([&] { basis.order(-1); }), {"-1"});
  expect_words(refusal([&] { basis.order_begin(basis.max_order() + 2); }), {std::to_string(basis.max_order() + 2)});
  expect_words(refusal([&] { basis.radial(basis.size(), 1); }), {"term"});
  expect_words(refusal([&] { basis.radial(0, 20.01); }), {"20.01", "0 to 20"});
}

}  // namespace
}  // namespace tambour
