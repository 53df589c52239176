#include "phantom/complex.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

namespace tambour::tools::phantom {
namespace {

constexpr double full_turn = 2 * std::numbers::pi;

/// What a broken ring has lost and how far the rest has moved.
constexpr double lost_low = 0.2;
constexpr double lost_high = 0.4;
constexpr double displaced_angle = 0.2;    // standard deviation, in subunit spacings
constexpr double displaced_radius = 0.05;  // standard deviation, in R

void add_subunit(const Complex& complex, double theta, double spacing, double outwards, std::vector<Blob>& blobs) {
  blobs.push_back({complex.r1 + outwards, theta, complex.s1, 1});
  blobs.push_back({complex.r2 + outwards, theta + complex.offset * spacing, complex.s2, complex.amplitude});
}

}  // namespace

Complex draw_complex(double radius, Random& random) {
  Complex complex{};
  complex.r1 = random.uniform(0.45, 0.65) * radius;
  complex.s1 = random.uniform(1.4, 2.0);
  complex.r2 = complex.r1 + random.uniform(-0.12, 0.18) * radius;
  complex.s2 = random.uniform(1.2, 1.8);
  complex.offset = random.uniform(0.15, 0.35);
  complex.amplitude = random.uniform(0.5, 0.8);
  complex.ring_share = random.uniform(0.3, 0.6);
  return complex;
}

std::vector<Blob> arrange(const Kind& kind, const Complex& complex, double radius, double turn, Random& random) {
  const int count = kind.subunits;
  const double spacing = full_turn / count;
  std::vector<Blob> blobs;
  switch (kind.shape) {
    case Shape::ring:
      for (int i = 0; i < count; ++i) add_subunit(complex, turn + i * spacing, spacing, 0, blobs);
      break;
    case Shape::broken: {
      const double lost = random.uniform(lost_low, lost_high) * count;
      const int kept = count - std::max(1, static_cast<int>(std::lround(lost)));
      for (int i = 0; i < std::max(kept, 1); ++i) {
        const double moved = random.normal() * displaced_angle * spacing;
        const double outwards = random.normal() * displaced_radius * radius;
        add_subunit(complex, turn + i * spacing + moved, spacing, outwards, blobs);
      }
      break;
    }
    case Shape::scattered:
      for (int i = 0; i < count; ++i) add_subunit(complex, random.angle(), spacing, 0, blobs);
      break;
    case Shape::blobs:
      for (int i = 0; i < 2 * count; ++i) {
        // The square root makes places uniform in area.
        const double r = 0.75 * radius * std::sqrt(random.uniform());
        const bool first = i % 2 == 0;
        blobs.push_back({r, random.angle(), first ? complex.s1 : complex.s2, first ? 1 : complex.amplitude});
      }
      break;
    case Shape::field:
    case Shape::noise:
      break;
  }
  return blobs;
}

}  // namespace tambour::tools::phantom
