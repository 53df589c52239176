// Transforms against the sums that define them, and plans made in many threads at once.
#include <fftw3.h>
#include <gtest/gtest.h>

#include <algorithm>
#include <atomic>
#include <cmath>
#include <complex>
#include <cstdint>
#include <limits>
#include <numbers>
#include <thread>
#include <vector>

#include "fourier/buffer.hpp"
#include "fourier/plans.hpp"
#include "support/disk_run.hpp"

namespace tambour::fourier {
namespace {

using Wide = long double;
constexpr Wide pi = std::numbers::pi_v<Wide>;
const std::vector<int> lengths = {2, 3, 4, 5, 7, 8, 15, 16, 27, 64, 90, 101, 128};

/// sum_j in[j] weight(j), the definition of every transform here.
template <class Value, class Weight>
auto sum(int n, const Value& in, const Weight& weight) {
  auto total = static_cast<Wide>(in(0)) * weight(0);
  for (int j = 1; j < n; ++j) total += static_cast<Wide>(in(j)) * weight(j);
  return total;
}

template <class T>
void fill(AlignedBuffer<T>& buffer, unsigned seed) {
  const auto noise = testing::white_noise<T>(buffer.size(), seed);
  std::copy(noise.begin(), noise.end(), buffer.begin());
}

/// Rounding of a transform of n values of size 1: the largest output is about 3 sqrt(n).
template <class T>
double bound(int n) {
  return 40 * std::sqrt(n) * std::numeric_limits<T>::epsilon();
}

template <class T>
class Fourier : public ::testing::Test {};
using Precisions = ::testing::Types<float, double>;
TYPED_TEST_SUITE(Fourier, Precisions);

/// Runs `lines` lines with gaps between them and compares with `expected(line, k)`.
template <class T, class Expected>
void check_lines(RealKind kind, int n, const Expected& expected) {
  const int lines = 3, in_stride = static_cast<int>(aligned_count<T>(n)), out_stride = in_stride + 16;
  const LineTransform<T> transform(kind, n, lines, in_stride, out_stride);
  AlignedBuffer<T> in(static_cast<std::size_t>(lines) * in_stride), out(static_cast<std::size_t>(lines) * out_stride);
  fill(in, static_cast<unsigned>(n));
  const std::vector<T> kept(in.begin(), in.end());  // run() may use its input as scratch
  transform.run(in.data(), out.data());
  for (int line = 0; line < lines; ++line)
    for (int k = 0; k < n; ++k) {
      const Wide truth = expected([&](int j) { return kept[line * in_stride + j]; }, k);
      ASSERT_NEAR(out[line * out_stride + k], static_cast<double>(truth), 2 * bound<T>(n)) << "n " << n << " k " << k;
    }
}

TYPED_TEST(Fourier, CosineTransformsFollowTheirDefinitions) {
  for (const int n : lengths) {
    check_lines<TypeParam>(RealKind::cosine2, n, [n](const auto& in, int k) {
      return 2 * sum(n, in, [=](int j) { return std::cos(pi * (j + 0.5L) * k / n); });
    });
    check_lines<TypeParam>(RealKind::cosine3, n, [n](const auto& in, int k) {
      return sum(n, in, [=](int j) { return j == 0 ? 1 : 2 * std::cos(pi * j * (k + 0.5L) / n); });
    });
  }
}

TYPED_TEST(Fourier, SineTransformFollowsItsDefinition) {
  for (const int n : lengths)
    check_lines<TypeParam>(RealKind::sine3, n, [n](const auto& in, int k) {
      return sum(n, in, [=](int j) {
        if (j == n - 1) return k % 2 == 0 ? Wide(1) : Wide(-1);
        return 2 * std::sin(pi * (j + 1) * (k + 0.5L) / n);
      });
    });
}

TYPED_TEST(Fourier, ForwardAndBackwardTransformsFollowTheirDefinitions) {
  using T = TypeParam;
  for (const int n : lengths) {
    const int lines = 2, real_stride = static_cast<int>(aligned_count<T>(n));
    const int half = n / 2 + 1, half_stride = static_cast<int>(aligned_count<std::complex<T>>(half));
    AlignedBuffer<T> real(static_cast<std::size_t>(lines) * real_stride);
    AlignedBuffer<std::complex<T>> spectrum(static_cast<std::size_t>(lines) * half_stride);
    fill(real, static_cast<unsigned>(n));
    const std::vector<T> kept(real.begin(), real.end());
    ForwardFft<T>(n, lines, real_stride, half_stride).run(real.data(), spectrum.data());
    EXPECT_TRUE(std::equal(kept.begin(), kept.end(), real.begin())) << "the input was changed";
    for (int line = 0; line < lines; ++line)
      for (int k = 0; k < half; ++k) {
        const auto truth = sum(
            n, [&](int j) { return kept[line * real_stride + j]; },
            [=](int j) { return std::polar(Wide(1), -2 * pi * (static_cast<long>(j) * k % n) / n); });
        ASSERT_NEAR(static_cast<double>(std::abs(std::complex<Wide>(spectrum[line * half_stride + k]) - truth)), 0,
                    bound<T>(n));
      }

    // Back from the spectrum: n times the input.
    BackwardFft<T>(n, lines, half_stride, real_stride).run(spectrum.data(), real.data());
    for (int line = 0; line < lines; ++line)
      for (int j = 0; j < n; ++j)
        ASSERT_NEAR(real[line * real_stride + j] / static_cast<T>(n), kept[line * real_stride + j], bound<T>(n));
  }
}

TYPED_TEST(Fourier, ImageTransformFollowsItsDefinition) {
  using T = TypeParam;
  const int rows = 6, columns = 9, half = columns / 2 + 1;
  const ImageFft<T> fft(rows, columns);
  AlignedBuffer<T> image(rows * columns);
  AlignedBuffer<std::complex<T>> spectrum(rows * half);
  fill(image, 3);
  const std::vector<T> kept(image.begin(), image.end());
  fft.forward(image.data(), spectrum.data());
  for (int q = 0; q < rows; ++q)
    for (int p = 0; p < half; ++p) {
      std::complex<Wide> truth;
      for (int y = 0; y < rows; ++y)
        for (int x = 0; x < columns; ++x)
          truth += static_cast<Wide>(kept[y * columns + x]) *
                   std::polar(Wide(1), -2 * pi * (Wide(q) * y / rows + Wide(p) * x / columns));
      EXPECT_NEAR(static_cast<double>(std::abs(std::complex<Wide>(spectrum[q * half + p]) - truth)), 0, bound<T>(54));
    }
  fft.backward(spectrum.data(), image.data());
  for (int i = 0; i < rows * columns; ++i) EXPECT_NEAR(image[i] / 54, kept[i], bound<T>(1));
}

// FFTW's planner keeps global state. Our plans come and go in several threads while the host program plans too; every
// result must have the bits of a quiet run.
TEST(FourierPlanner, MayRaceWithItselfAndWithTheHost) {
  const int n = 360;
  const auto transform_once = [](RealKind kind) {
    const LineTransform<double> transform(kind, n, 1, n, n);
    AlignedBuffer<double> in(n), out(n);
    fill(in, 4);
    transform.run(in.data(), out.data());
    return std::vector<double>(out.begin(), out.end());
  };
  const RealKind kinds[] = {RealKind::cosine2, RealKind::cosine3, RealKind::sine3};
  std::vector<std::vector<double>> quiet;
  for (const RealKind kind : kinds) quiet.push_back(transform_once(kind));

  std::atomic<int> wrong = 0;
  std::vector<std::thread> threads;
  for (int t = 0; t < 3; ++t)
    threads.emplace_back([&, t] {
      for (int round = 0; round < 60; ++round) {
        const int kind = (round + t) % 3;
        if (transform_once(kinds[kind]) != quiet[kind]) ++wrong;
      }
    });
  for (int t = 0; t < 2; ++t)
    threads.emplace_back([&, t] {
      for (int round = 0; round < 60; ++round) {
        const int size = 100 + 7 * round + t;
        std::vector<double> in(size), out(2 * (size / 2 + 1));
        fftw_plan plan =
            fftw_plan_dft_r2c_1d(size, in.data(), reinterpret_cast<fftw_complex*>(out.data()), FFTW_ESTIMATE);
        if (!plan) {
          ++wrong;
          continue;
        }
        std::fill(in.begin(), in.end(), 1.0);
        fftw_execute(plan);
        if (std::abs(out[0] - size) > 1e-10) ++wrong;
        fftw_destroy_plan(plan);
      }
    });
  for (auto& thread : threads) thread.join();
  EXPECT_EQ(wrong, 0);
}

TEST(FourierBuffer, IsAlignedAndZero) {
  for (const std::size_t size : {0U, 1U, 17U, 1000U}) {
    AlignedBuffer<float> buffer(size);
    EXPECT_EQ(reinterpret_cast<std::uintptr_t>(buffer.data()) % alignment, 0U);
    EXPECT_TRUE(std::all_of(buffer.begin(), buffer.end(), [](float v) { return v == 0; }));
    AlignedBuffer<float> moved = std::move(buffer);
    EXPECT_EQ(moved.size(), size);
  }
  EXPECT_EQ(aligned_count<float>(1), 16U);
  EXPECT_EQ(aligned_count<double>(8), 8U);
  EXPECT_EQ(aligned_count<std::complex<double>>(5), 8U);
}

TEST(FourierSizes, NextFastSizeIsTheSmallest) {
  const auto smooth = [](int n) {
    for (const int factor : {2, 3, 5})
      while (n % factor == 0) n /= factor;
    return n == 1;
  };
  for (const int multiple : {1, 2, 4})
    for (int size = 1; size < 700; ++size) {
      int truth = size;
      while (truth % multiple != 0 || !smooth(truth)) ++truth;
      ASSERT_EQ(next_fast_size(size, multiple), truth);
    }
  EXPECT_EQ(next_fast_size(64.2, 2), 72);
}

}  // namespace
}  // namespace tambour::fourier
