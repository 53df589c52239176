// Parts of the generator of test images.
#include <gtest/gtest.h>

#include <cmath>
#include <complex>
#include <numbers>

#include "phantom/generator.hpp"
#include "phantom/small_fourier.hpp"
#include "tambour/error.hpp"

namespace tambour::tools::phantom {
namespace {

using ComplexNumber = std::complex<double>;

TEST(SmallFourier, AgreesWithTheSumThatDefinesIt) {
  for (const auto& [rows, columns] : {std::pair{1, 1}, {4, 6}, {7, 5}, {9, 16}, {13, 2}}) {
    Random random(1, Random::Purpose::noise, 0);
    std::vector<ComplexNumber> values(static_cast<std::size_t>(rows * columns));
    for (auto& value : values) value = {random.normal(), random.normal()};
    auto transformed = values;
    fourier_2d(transformed, rows, columns, Direction::forward);
    for (int v = 0; v < rows; ++v)
      for (int u = 0; u < columns; ++u) {
        ComplexNumber sum = 0;
        for (int y = 0; y < rows; ++y)
          for (int x = 0; x < columns; ++x)
            sum += values[static_cast<std::size_t>(y * columns + x)] *
                   std::polar(1.0, -2 * std::numbers::pi * (double(u * x) / columns + double(v * y) / rows));
        EXPECT_LT(std::abs(sum - transformed[static_cast<std::size_t>(v * columns + u)]), 1e-12);
      }
    fourier_2d(transformed, rows, columns, Direction::backward);
    for (std::size_t i = 0; i < values.size(); ++i)
      EXPECT_LT(std::abs(transformed[i] / double(rows * columns) - values[i]), 1e-14);
  }
}

TEST(Random, StreamsDifferAndRepeat) {
  Random a(1, Random::Purpose::pose, 0), b(1, Random::Purpose::pose, 0), c(1, Random::Purpose::pose, 1),
      d(1, Random::Purpose::noise, 0), e(2, Random::Purpose::pose, 0);
  const double first = a.uniform();
  EXPECT_EQ(first, b.uniform());
  EXPECT_NE(first, c.uniform());
  EXPECT_NE(first, d.uniform());
  EXPECT_NE(first, e.uniform());
}

GeneratorOptions ring_options(const std::string& mix) {
  GeneratorOptions options;
  options.mix = parse_mix(mix);
  return options;
}

TEST(Scene, DerivativesAreThoseOfTheValues) {
  Random random(3, Random::Purpose::damage, 0);
  const Complex complex = draw_complex(24, random);
  const auto blobs = arrange(parse_mix("ring:5")[0], complex, 24, 0.3, random);
  const auto drawn = [&](Centre centre) {
    Drawing drawing(64, 60);
    draw(blobs, centre, drawing);
    draw(Annulus{complex.r1, 3}, centre, drawing);
    return drawing;
  };
  // Moving the object by h changes each pixel by -h times the derivative.
  const double h = 1e-5;
  const Centre centre{30.3, 31.1};
  const Drawing here = drawn(centre);
  const Drawing right = drawn({centre.x + h, centre.y}), left = drawn({centre.x - h, centre.y});
  const Drawing below = drawn({centre.x, centre.y + h}), above = drawn({centre.x, centre.y - h});
  for (std::size_t i = 0; i < here.value.pixels().size(); ++i) {
    EXPECT_NEAR(here.along_x.pixels()[i], -(right.value.pixels()[i] - left.value.pixels()[i]) / (2 * h), 1e-8);
    EXPECT_NEAR(here.along_y.pixels()[i], -(below.value.pixels()[i] - above.value.pixels()[i]) / (2 * h), 1e-8);
  }
}

TEST(Generator, SignalToNoiseIsTheStatedOne) {
  GeneratorOptions options = ring_options("ring:6,blobs,field,scattered:5,broken:7");
  options.snr = 0.3;
  options.noise = Noise::none;  // then the signal has unit variance
  const Generator generator(options);
  for (std::size_t image = 0; image < 20; ++image) {
    Truth truth;
    const Picture picture = generator.make(image, truth);
    EXPECT_NEAR(disk_moments(picture, *truth.centre, options.radius).variance, 1, 1e-12) << truth.kind;
  }
}

TEST(Generator, ARingIsTheSameAfterATurnByItsSpacing) {
  GeneratorOptions options = ring_options("ring:4");
  options.noise = Noise::none;
  options.centre_spread = 0;
  Truth truth;
  const Picture picture = Generator(options).make(0, truth);
  const auto view = picture.view();
  for (std::ptrdiff_t y = 0; y < 64; ++y)
    for (std::ptrdiff_t x = 0; x < 64; ++x) EXPECT_NEAR(view(y, x), view(x, 63 - y), 1e-12);
  EXPECT_LT(*truth.angle, 90);
}

TEST(Generator, ABrokenRingIsNot) {
  GeneratorOptions options = ring_options("broken:4");
  options.noise = Noise::none;
  options.centre_spread = 0;
  Truth truth;
  const Picture picture = Generator(options).make(0, truth);
  double apart = 0;
  for (std::ptrdiff_t y = 0; y < 64; ++y)
    for (std::ptrdiff_t x = 0; x < 64; ++x)
      apart = std::max(apart, std::abs(picture.view()(y, x) - picture.view()(x, 63 - y)));
  EXPECT_GT(apart, 1);
}

TEST(Generator, SubunitsStandAtTheStatedAngle) {
  GeneratorOptions options = ring_options("ring:3");
  options.noise = Noise::none;
  Truth truth;
  const Generator generator(options);
  for (std::size_t image = 0; image < 10; ++image) {
    const Picture picture = generator.make(image, truth);
    // The first blobs are the brightest: the brightest pixel lies near one of them.
    std::ptrdiff_t best_x = 0, best_y = 0;
    for (std::ptrdiff_t y = 0; y < 64; ++y)
      for (std::ptrdiff_t x = 0; x < 64; ++x)
        if (picture.view()(y, x) > picture.view()(best_y, best_x)) best_x = x, best_y = y;
    const double theta = std::atan2(double(best_y) - truth.centre->y, double(best_x) - truth.centre->x);
    const double apart = std::remainder(theta * 180 / std::numbers::pi - *truth.angle, 120.0);
    EXPECT_LT(std::abs(apart), 12);  // a pixel at 11 px is 5 degrees, and the second blob pulls a little
  }
}

TEST(Generator, InformationOfColouredNoiseIsThatOfWhiteWhereTheSpectrumIsFlat) {
  // A pattern of one frequency q sees the noise as if it were white with the variance S(q).
  const ColouredNoise noise(64, 64);
  double mean = 0;
  for (int i = 0; i < 64; ++i)
    for (int j = 0; j < 64; ++j) {
      const double qx = 2 * std::numbers::pi * std::min(i, 64 - i) / 64,
                   qy = 2 * std::numbers::pi * std::min(j, 64 - j) / 64;
      mean += (0.15 + 1 / (1 + (qx * qx + qy * qy) / 0.25)) / (64 * 64);
    }
  for (const int frequency : {1, 5, 20}) {
    Picture wave(64, 64);
    double energy = 0;
    for (std::ptrdiff_t y = 0; y < 64; ++y)
      for (std::ptrdiff_t x = 0; x < 64; ++x) {
        wave.view()(y, x) = std::cos(2 * std::numbers::pi * frequency * double(x) / 64);
        energy += wave.view()(y, x) * wave.view()(y, x);
      }
    const double q = 2 * std::numbers::pi * frequency / 64;
    const double s = (0.15 + 1 / (1 + q * q / 0.25)) / mean;
    EXPECT_NEAR(noise.whitened_sum(wave) / (energy / s), 1, 1e-10);
  }
}

TEST(Mix, SharesSumToOne) {
  const auto mix = parse_mix("ring:12=3,noise");
  ASSERT_EQ(mix.size(), 2U);
  EXPECT_EQ(mix[0].share, 0.75);
  EXPECT_EQ(mix[1].share, 0.25);
  EXPECT_EQ(mix[0].fold(), 12);
  EXPECT_FALSE(mix[1].has_pattern());
  EXPECT_THROW(parse_mix("ring:12,,noise"), Error);
}

TEST(Mix, IsDrawnInItsShares) {
  GeneratorOptions options = ring_options("ring:5=0.3,noise=0.7");
  options.rows = options.columns = 16;
  options.radius = 4;
  const Generator generator(options);
  int rings = 0;
  Truth truth;
  for (std::size_t image = 0; image < 2000; ++image) {
    generator.make(image, truth);
    rings += truth.kind == "ring:5" ? 1 : 0;
  }
  EXPECT_NEAR(rings / 2000.0, 0.3, 0.04);  // four standard errors
}

}  // namespace
}  // namespace tambour::tools::phantom
