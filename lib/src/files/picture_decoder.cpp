#include "files/picture_decoder.hpp"

#include <opencv2/core.hpp>
#include <opencv2/imgcodecs.hpp>

#include "files/byte_order.hpp"
#include "files/refuse.hpp"
#include "files/sample_mix.hpp"
#include "files/sample_type.hpp"

namespace tambour {
namespace {

// OpenCV gives colours as blue, green, red, alpha; grey with alpha comes as three equal colours and alpha.
int decoded_channel(int sample, const PictureHeader& header, int channels) {
  if (channels == 1) return 0;
  if (header.kind == PixelKind::grey) return sample == 0 ? 0 : 3;
  return sample < 3 ? 2 - sample : sample;
}

cv::Mat decode_or_refuse(const std::string& path, std::span<const std::byte> bytes) {
  // The array header refers to the caller's bytes; imdecode only reads them.
  const cv::Mat encoded(1, static_cast<int>(bytes.size()), CV_8UC1, const_cast<std::byte*>(bytes.data()));
  cv::Mat decoded;
  try {
    decoded = cv::imdecode(encoded, cv::IMREAD_UNCHANGED | cv::IMREAD_IGNORE_ORIENTATION);
  } catch (const cv::Exception& error) {
    refuse_input("{}: cannot be decoded ({})", path, error.err);
  }
  if (decoded.empty()) refuse_input("{}: cannot be decoded: damaged, or a variant that is not supported", path);
  return decoded;
}

}  // namespace

void check_picture_size(const std::string& path, const PictureHeader& header, int bits_a_sample, std::uint64_t stored,
                        std::uint64_t expansion) {
  // The limits of OpenCV's decoders.
  constexpr std::ptrdiff_t longest_side = 1 << 20;
  constexpr std::ptrdiff_t most_pixels = 1 << 30;
  const auto [rows, columns] = header.shape;
  if (rows < 1 || columns < 1 || rows > longest_side || columns > longest_side || rows * columns > most_pixels)
    refuse_input("{}: the header tells {} rows of {} pixels; allowed are 1 to 2^20 each and 2^30 pixels", path, rows,
                 columns);
  if (stored > (std::uint64_t{1} << 31) - 1) refuse_input("{}: has {} bytes; allowed are 2^31 - 1", path, stored);
  const auto pixels = static_cast<std::uint64_t>(rows * columns);
  check_expansion(path, pixels * static_cast<std::uint64_t>(header.samples * bits_a_sample) / 8, stored, expansion);
}

void decode_picture(const std::string& path, std::span<const std::byte> bytes, const PictureHeader& header,
                    const std::vector<SampleWeight>& weights, ImageView<double> out) {
  const cv::Mat picture = decode_or_refuse(path, bytes);
  if (picture.rows != out.rows || picture.cols != out.columns)
    refuse_input("{}: decodes to {} x {} pixels (rows x columns), its header tells {} x {}", path, picture.rows,
                 picture.cols, out.rows, out.columns);
  const int channels = picture.channels();
  const bool enough = channels == 1 ? header.samples == 1
                                    : channels >= 3 && (header.kind == PixelKind::grey || header.samples <= channels);
  if (!enough || (picture.depth() != CV_8U && picture.depth() != CV_16U))
    refuse_input("{}: decodes to {} channels of an unexpected type", path, channels);

  const SampleFormat format{picture.depth() == CV_8U ? SampleType::u1 : SampleType::u2, host_is_big_endian};
  std::vector<double> scratch(static_cast<std::size_t>(out.columns));
  for (int y = 0; y < picture.rows; ++y) {
    const auto* row = reinterpret_cast<const std::byte*>(picture.ptr(y));
    mix_samples(weights, out.columns, scratch.data(), out.row(y), [&](int sample, double* to) {
      const auto offset = static_cast<std::size_t>(decoded_channel(sample, header, channels)) * picture.elemSize1();
      decode_samples(format, row + offset, picture.elemSize(), static_cast<std::size_t>(out.columns), to);
    });
  }
}

}  // namespace tambour
