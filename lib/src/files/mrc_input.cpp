// MRC2014 stacks and volumes, read as stacks of sections. Source of the layout: Cheng et al., J. Struct. Biol. 192
// (2015).
#include <cmath>

#include "files/byte_order.hpp"
#include "files/frame_checks.hpp"
#include "files/image_file.hpp"
#include "files/mrc_layout.hpp"
#include "files/refuse.hpp"
#include "files/sample_type.hpp"
#include "files/units.hpp"

namespace tambour {
namespace {

using Header = std::vector<std::byte>;

std::int32_t word(const Header& header, std::size_t offset, bool big) {
  return load<std::int32_t>(header.data() + offset, big);
}

// Numbers that no file would hold when read in the wrong byte order.
bool plausible(const Header& header, bool big) {
  constexpr std::int32_t longest_side = 1 << 20;
  const auto columns = word(header, mrc::columns, big), rows = word(header, mrc::rows, big);
  const auto mode = word(header, mrc::mode, big);
  return columns > 0 && columns <= longest_side && rows > 0 && rows <= longest_side &&
         word(header, mrc::sections, big) > 0 && ((mode >= 0 && mode <= 16) || mode == 101);
}

class MrcFile final : public ImageFile {
 public:
  MrcFile(SharedReadFile file, const OpenOptions& options) : file_(std::move(file)) {
    if (file_->size() < mrc::header_bytes)
      refuse_input("{}: has {} bytes; an MRC header alone has {}", file_->path(), file_->size(), mrc::header_bytes);
    const Header header = file_->head(mrc::header_bytes);
    find_byte_order(header);
    const bool big = format_.big_endian;
    shape_ = {word(header, mrc::rows, big), word(header, mrc::columns, big)};
    sections_ = static_cast<std::size_t>(word(header, mrc::sections, big));
    find_type(word(header, mrc::mode, big));
    check_length(word(header, mrc::extended_bytes, big));
    find_pixel_size(header);
    if (word(header, mrc::space_group, big) != 0 && sections_ > 1)
      remarks_.push_back(fmt::format("a volume, read as a stack of its {} sections", sections_));
    std::string remark;
    choose_samples(file_->path(), 1, PixelKind::grey, options.channel, remark);
  }

  std::size_t pages() const noexcept override { return sections_; }
  FrameShape shape(std::size_t) const override { return shape_; }
  PixelSize pixel_size() const override { return pixel_size_; }
  std::vector<std::string> remarks() const override { return remarks_; }

  FrameShape read(std::size_t page, ImageView<double> out) const override {
    if (shape_ != shape_of(out)) return shape_;
    std::vector<std::byte> bytes(static_cast<std::size_t>(section_bytes_));
    file_->read(data_ + page * section_bytes_, bytes);
    const std::size_t stride = sample_bytes(format_.type);
    const auto columns = static_cast<std::size_t>(out.columns);
    for (std::ptrdiff_t y = 0; y < out.rows; ++y)
      decode_samples(format_, bytes.data() + static_cast<std::size_t>(y) * columns * stride, stride, columns,
                     out.row(y));
    return shape_;
  }

 private:
  void find_byte_order(const Header& header) {
    const auto stamp = std::to_integer<int>(header[mrc::machine_stamp]);
    const bool stamped = stamp == mrc::big_endian_stamp || stamp == mrc::little_endian_stamp;
    const bool first = stamp == mrc::big_endian_stamp;
    format_.big_endian = plausible(header, first) ? first : !first;
    if (!plausible(header, format_.big_endian))
      refuse_input("{}: the MRC header makes no sense in either byte order ({} columns, {} rows, {} sections, mode {})",
                   file_->path(), word(header, mrc::columns, first), word(header, mrc::rows, first),
                   word(header, mrc::sections, first), word(header, mrc::mode, first));
    if (stamped && format_.big_endian != first)
      remarks_.push_back(fmt::format("the machine stamp contradicts the header's numbers, read as {}-endian",
                                     format_.big_endian ? "big" : "little"));
  }

  void find_type(int mode) {
    for (const auto& entry : mrc::modes)
      if (entry.mode == mode) {
        format_.type = entry.type;
        return;
      }
    refuse_input("{}: has MRC mode {}; allowed are 0, 1, 2, 6 and 12", file_->path(), mode);
  }

  void check_length(int extended) {
    if (extended < 0 || mrc::header_bytes + static_cast<std::uint64_t>(extended) > file_->size())
      refuse_input("{}: the header tells an extended header of {} bytes, but the file has only {} bytes", file_->path(),
                   extended, file_->size());
    data_ = mrc::header_bytes + static_cast<std::uint64_t>(extended);
    const auto columns = static_cast<std::uint64_t>(shape_.columns), rows = static_cast<std::uint64_t>(shape_.rows);
    section_bytes_ = columns * rows * sample_bytes(format_.type);
    const auto total = product({section_bytes_, sections_});
    if (!total || *total > file_->size() - data_)
      refuse_input(
          "{}: the header tells {} sections of {} x {} pixels (rows x columns) of {} bytes each, "
          "but behind the header the file has only {} bytes",
          file_->path(), sections_, shape_.rows, shape_.columns, sample_bytes(format_.type), file_->size() - data_);
    if (*total < file_->size() - data_)
      remarks_.push_back(
          fmt::format("holds {} bytes more than its header tells, which are not read", file_->size() - data_ - *total));
  }

  // The cell divided by its sampling, along the axis that the columns stand for.
  void find_pixel_size(const Header& header) {
    const bool big = format_.big_endian;
    const int axis = word(header, mrc::column_axis, big);
    const std::size_t place = axis >= 1 && axis <= 3 ? static_cast<std::size_t>(axis - 1) : 0;
    if (axis != 1 && axis >= 2 && axis <= 3)
      remarks_.push_back(fmt::format("the columns run along axis {} of the cell; read as they are stored", axis));
    const double cell = load<float>(header.data() + mrc::cell + 4 * place, big);
    const int samples = word(header, mrc::sampling + 4 * place, big);
    if (samples > 0 && std::isfinite(cell) && cell > 0)
      pixel_size_ = {rounded_to_float_digits(cell / samples), "angstrom"};
  }

  SharedReadFile file_;
  SampleFormat format_;
  FrameShape shape_;
  std::size_t sections_ = 0;
  std::uint64_t section_bytes_ = 0;
  std::uint64_t data_ = 0;  // offset of the first section
  PixelSize pixel_size_;
  std::vector<std::string> remarks_;
};

}  // namespace

std::unique_ptr<ImageFile> open_mrc(SharedReadFile file, const OpenOptions& options) {
  return std::make_unique<MrcFile>(std::move(file), options);
}

}  // namespace tambour
