#include <opencv2/core.hpp>
#include <opencv2/imgcodecs.hpp>

#include "base/check.hpp"
#include "tambour/files.hpp"

namespace tambour {

std::vector<std::uint8_t> encode_png(MatrixView<const std::uint8_t> pixels, int channels) {
  require(channels == 1 || channels == 3, "the number of channels", channels, "1 or 3");
  require(pixels.rows >= 1 && pixels.rows <= 1'000'000, "the number of rows", pixels.rows, "1 to 1000000");
  require(pixels.columns >= channels && pixels.columns % channels == 0 && pixels.columns / channels <= 1'000'000,
          "the number of columns", pixels.columns, "a multiple of the channels, at most 1000000 pixels");
  const auto width = pixels.columns / channels;
  cv::Mat picture(static_cast<int>(pixels.rows), static_cast<int>(width), CV_8UC(channels));
  for (std::ptrdiff_t y = 0; y < pixels.rows; ++y) {
    const std::uint8_t* from = pixels.row(y);
    std::uint8_t* to = picture.ptr(static_cast<int>(y));
    // OpenCV wants blue first.
    for (std::ptrdiff_t x = 0; x < width; ++x)
      for (std::ptrdiff_t c = 0; c < channels; ++c) to[x * channels + c] = from[x * channels + channels - 1 - c];
  }
  std::vector<std::uint8_t> bytes;
  bool encoded = false;
  try {
    encoded = cv::imencode(".png", picture, bytes);
  } catch (const cv::Exception& error) {
    throw Error(ErrorCode::internal, "a picture cannot be encoded as PNG: " + error.err);
  }
  if (!encoded) throw Error(ErrorCode::internal, "a picture cannot be encoded as PNG");
  return bytes;
}

}  // namespace tambour
