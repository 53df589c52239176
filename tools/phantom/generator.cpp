#include "phantom/generator.hpp"

#include <fmt/format.h>

#include <cmath>
#include <numbers>

#include "phantom/clutter.hpp"
#include "tambour/disk_transform.hpp"
#include "tambour/error.hpp"

namespace tambour::tools::phantom {
namespace {

constexpr double ring_sigma = 3;  // px

/// Divides by the standard deviation over the disk.
void to_unit_variance(Drawing& drawing, Centre centre, double radius) {
  drawing.scale(1 / std::sqrt(disk_moments(drawing.value, centre, radius).variance));
}

}  // namespace

Generator::Generator(const GeneratorOptions& options) : options_(options) {
  const Centre middle = frame_middle(options_.rows, options_.columns);
  const ImageStatus fits =
      disk_in_frame(middle, options_.radius + options_.centre_spread, options_.rows, options_.columns);
  if (!fits.ok())
    throw Error(ErrorCode::invalid_argument,
                fmt::format("--radius {} with --centre-spread {} does not fit into {} by {} px", options_.radius,
                            options_.centre_spread, options_.columns, options_.rows));
  for (std::size_t i = 0; i < options_.mix.size(); ++i) {
    Random random(options_.seed, Random::Purpose::complex_of_kind, i);
    complexes_.push_back(draw_complex(options_.radius, random));
  }
  if (options_.noise == Noise::coloured) coloured_.emplace(options_.rows, options_.columns);
}

const Kind& Generator::kind_of(double draw) const {
  for (const auto& kind : options_.mix) {
    if (draw < kind.share) return kind;
    draw -= kind.share;
  }
  // Shares sum to 1 up to rounding.
  return options_.mix.back();
}

Drawing Generator::signal(const Kind& kind, std::size_t image, Centre centre, double turn) const {
  Complex complex = complexes_[static_cast<std::size_t>(&kind - options_.mix.data())];
  if (options_.vary) {
    Random random(options_.seed, Random::Purpose::complex_of_image, image);
    complex = draw_complex(options_.radius, random);
  }
  Drawing drawing(options_.rows, options_.columns);
  if (kind.shape == Shape::field) {
    Random random(options_.seed, Random::Purpose::field, image);
    drawing.value = isotropic_field(options_.rows, options_.columns, centre, options_.radius, complex.s1, random);
  } else {
    Random random(options_.seed, Random::Purpose::damage, image);
    draw(arrange(kind, complex, options_.radius, turn, random), centre, drawing);
    if (kind.shape != Shape::blobs) {
      Drawing ring(options_.rows, options_.columns);
      draw(Annulus{complex.r1, ring_sigma}, centre, ring);
      to_unit_variance(ring, centre, options_.radius);
      to_unit_variance(drawing, centre, options_.radius);
      drawing.scale(std::sqrt(1 - complex.ring_share));
      drawing.add(std::sqrt(complex.ring_share), ring);
    }
  }
  to_unit_variance(drawing, centre, options_.radius);
  return drawing;
}

double Generator::information(const Drawing& drawing) const {
  if (coloured_) return (coloured_->whitened_sum(drawing.along_x) + coloured_->whitened_sum(drawing.along_y)) / 2;
  double sum = 0;
  for (const double d : drawing.along_x.pixels()) sum += d * d;
  for (const double d : drawing.along_y.pixels()) sum += d * d;
  return sum / 2;
}

Picture Generator::make(std::size_t image, Truth& truth) const {
  Random pose(options_.seed, Random::Purpose::pose, image);
  const Kind& kind = kind_of(pose.uniform());
  const double away = options_.centre_spread * std::sqrt(pose.uniform());
  const double direction = pose.angle();
  const Centre middle = frame_middle(options_.rows, options_.columns);
  const Centre centre{middle.x + away * std::cos(direction), middle.y + away * std::sin(direction)};
  const double turn = pose.angle();

  const double rms = options_.noise == Noise::none ? 1 : std::sqrt(options_.snr);
  truth = Truth{kind.name, std::nullopt, std::nullopt, std::nullopt, std::nullopt};
  Picture picture(options_.rows, options_.columns);
  if (kind.shape != Shape::noise) {
    Drawing drawing = signal(kind, image, centre, turn);
    drawing.scale(rms);
    picture.add(1, drawing.value);
    truth.centre = centre;
    if (kind.has_pattern()) {
      truth.fold = kind.fold();
      truth.angle = std::fmod(turn * 180 / std::numbers::pi, 360.0 / kind.fold());
      if (options_.noise != Noise::none) truth.information = information(drawing);
    }
  }

  Random clutter(options_.seed, Random::Purpose::clutter, image);
  if (options_.gradient > 0)
    picture.add(options_.gradient * rms, gradient(options_.rows, options_.columns, centre, options_.radius, clutter));
  if (options_.contaminant > 0)
    picture.add(options_.contaminant * rms,
                contaminant(options_.rows, options_.columns, centre, options_.radius, clutter));
  Random noise(options_.seed, Random::Purpose::noise, image);
  if (options_.noise == Noise::white) picture.add(1, white_noise(options_.rows, options_.columns, noise));
  if (coloured_) picture.add(1, coloured_->draw(noise));
  return picture;
}

}  // namespace tambour::tools::phantom
