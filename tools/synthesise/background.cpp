#include "synthesise/background.hpp"

#include <fmt/format.h>

#include "tambour/error.hpp"

namespace tambour::tools::synthesise {

void require_restorable(const std::string& path, const PreparationOptions& preparation) {
  if (preparation.scaling == Scaling::none) return;
  throw Error(
      ErrorCode::bad_input,
      fmt::format("{}: images were scaled ({}) and the file does not hold the factors, so --add-background cannot "
                  "give them back; allowed is scaling none",
                  path, to_string(preparation.scaling)));
}

void restore_background(const CoefficientHeader& header, const CoefficientRecord& record, ImageView<double> image) {
  const double* b = record.background;
  const double sign = header.preparation.invert_contrast ? -1 : 1;
  for (std::ptrdiff_t y = 0; y < image.rows; ++y) {
    const double v = (static_cast<double>(y) - record.centre.y) / header.geometry.radius;
    for (std::ptrdiff_t x = 0; x < image.columns; ++x) {
      const double u = (static_cast<double>(x) - record.centre.x) / header.geometry.radius;
      image(y, x) = sign * (image(y, x) + b[0] + b[1] * u + b[2] * v + b[3] * u * u + b[4] * u * v + b[5] * v * v);
    }
  }
}

}  // namespace tambour::tools::synthesise
