// MRC2014 image stacks of 32-bit floats.
#include <algorithm>
#include <cmath>
#include <cstring>
#include <limits>

#include "files/byte_order.hpp"
#include "files/mrc_layout.hpp"
#include "files/output_file.hpp"
#include "files/stack_writer.hpp"
#include "files/units.hpp"
#include "tambour/error.hpp"
#include "tambour/version.hpp"

namespace tambour {
namespace {

// Mean and spread of all pixels, image by image without loss (Chan, Golub and LeVeque 1983).
class Statistics {
 public:
  void add(const std::vector<std::byte>& pixels) {
    const std::size_t count = pixels.size() / 4;
    double sum = 0;
    for (std::size_t i = 0; i < count; ++i) {
      const double value = load<float>(pixels.data() + 4 * i, host_is_big_endian);
      finite_ = finite_ && std::isfinite(value);
      smallest_ = std::min(smallest_, value);
      largest_ = std::max(largest_, value);
      sum += value;
    }
    const double mean = sum / static_cast<double>(count);
    double squares = 0;
    for (std::size_t i = 0; i < count; ++i) {
      const double difference = load<float>(pixels.data() + 4 * i, host_is_big_endian) - mean;
      squares += difference * difference;
    }
    const auto added = static_cast<double>(count), all = count_ + added;
    const double shift = mean - mean_;
    squares_ += squares + shift * shift * count_ * added / all;
    mean_ += shift * added / all;
    count_ = all;
  }

  // DMIN, DMAX, DMEAN, RMS. The format marks unknown ones by DMAX < DMIN, a mean below both and a negative RMS.
  std::vector<float> values() const {
    if (!finite_) return {0, -1, -2, -1};
    return {static_cast<float>(smallest_), static_cast<float>(largest_), static_cast<float>(mean_),
            static_cast<float>(std::sqrt(squares_ / count_))};
  }

 private:
  bool finite_ = true;
  double smallest_ = std::numeric_limits<double>::infinity();
  double largest_ = -std::numeric_limits<double>::infinity();
  double count_ = 0, mean_ = 0, squares_ = 0;
};

class MrcWriter final : public CheckedStackWriter {
 public:
  MrcWriter(const std::string& path, const StackShape& shape, bool overwrite)
      : CheckedStackWriter(path, shape), file_(path, overwrite) {
    // The header can be made only when the statistics are known; until then its place is blank.
    file_.append(std::vector<std::byte>(mrc::header_bytes));
  }

 private:
  void put(ImageView<const double> image) override {
    encode_pixels(image, PixelType::float32, pixels_);
    statistics_.add(pixels_);
    file_.append(pixels_);
  }

  void complete() override {
    file_.write(0, header());
    file_.commit();
  }

  std::vector<std::byte> header() const {
    std::vector<std::byte> bytes(mrc::header_bytes);
    const auto put_word = [&](std::size_t offset, auto value) {
      static_assert(sizeof(value) == 4);
      store(bytes.data() + offset, value, host_is_big_endian);
    };
    const auto columns = static_cast<std::int32_t>(shape().columns), rows = static_cast<std::int32_t>(shape().rows);
    put_word(mrc::columns, columns);
    put_word(mrc::rows, rows);
    put_word(mrc::sections, static_cast<std::int32_t>(shape().images));
    put_word(mrc::mode, 2);
    // An image stack: space group 0 and a cell one section deep.
    put_word(mrc::sampling, columns);
    put_word(mrc::sampling + 4, rows);
    put_word(mrc::sampling + 8, 1);
    const double pixel = convert_length(shape().pixel_size, "angstrom").value_or(0);
    put_word(mrc::cell, static_cast<float>(pixel * columns));
    put_word(mrc::cell + 4, static_cast<float>(pixel * rows));
    put_word(mrc::cell + 8, static_cast<float>(pixel));
    for (std::size_t i = 0; i < 3; ++i) {
      put_word(mrc::angles + 4 * i, 90.0F);
      put_word(mrc::column_axis + 4 * i, static_cast<std::int32_t>(i + 1));
    }
    const auto statistics = statistics_.values();
    for (std::size_t i = 0; i < 3; ++i) put_word(mrc::statistics + 4 * i, statistics[i]);
    put_word(mrc::rms, statistics[3]);
    put_word(mrc::version, mrc::current_version);
    std::memcpy(bytes.data() + mrc::map_word, "MAP ", 4);
    const auto stamp = static_cast<std::byte>(host_is_big_endian ? mrc::big_endian_stamp : mrc::little_endian_stamp);
    bytes[mrc::machine_stamp] = bytes[mrc::machine_stamp + 1] = stamp;
    put_word(mrc::label_count, 1);
    const std::string label = std::string("tambour ") + version();
    std::memcpy(bytes.data() + mrc::labels, label.data(), std::min(label.size(), mrc::label_bytes));
    return bytes;
  }

  AtomicFile file_;
  Statistics statistics_;
  std::vector<std::byte> pixels_;
};

}  // namespace

std::unique_ptr<StackWriter> create_mrc(const std::string& path, const StackShape& shape, bool overwrite) {
  if (shape.type != PixelType::float32)
    throw Error(ErrorCode::invalid_argument, path + ": MRC cannot hold 64-bit floats; allowed are 32-bit floats",
                "float64", "float32");
  constexpr auto largest = std::numeric_limits<std::int32_t>::max();
  if (shape.images > static_cast<std::size_t>(largest) || shape.rows > largest || shape.columns > largest)
    throw Error(ErrorCode::invalid_argument, path + ": MRC holds at most 2^31 - 1 images, rows and columns");
  return std::make_unique<MrcWriter>(path, shape, overwrite);
}

}  // namespace tambour
