// Several files as one stack.
#include <algorithm>
#include <map>
#include <unordered_set>

#include "base/check.hpp"
#include "files/image_file.hpp"
#include "files/refuse.hpp"

namespace tambour {
namespace {

// One input; where `file` is empty the input could not be opened and stands as one image that gives the reason.
struct Input {
  std::string name;
  std::unique_ptr<ImageFile> file;
  std::string reason;
  std::size_t first_image = 0;

  std::size_t images() const { return file ? file->pages() : 1; }
};

class ImageStack final : public FileSource {
 public:
  ImageStack(const std::vector<std::string>& names, const OpenOptions& options) {
    if (names.empty()) refuse_input("no input was named");
    for (const auto& name : names) add(name, options, names.size() == 1);
    const bool sized = find_size();
    if (!sized) refuse_input("none of the {} inputs can be read; the first: {}", inputs_.size(), inputs_[0].reason);
    find_pixel_size(options);
    collect_remarks();
  }

  std::size_t images() const noexcept override { return images_; }
  std::ptrdiff_t rows() const noexcept override { return shape_.rows; }
  std::ptrdiff_t columns() const noexcept override { return shape_.columns; }
  PixelSize pixel_size() const override { return pixel_size_; }

  std::string name(std::size_t image) const override {
    const Input& input = input_of(image);
    if (input.images() == 1) return input.name;
    return fmt::format("{}#{}", input.name, image - input.first_image);
  }

  std::vector<std::string> files() const override {
    std::vector<std::string> files;
    std::unordered_set<std::string> seen;
    for (const auto& input : inputs_)
      if (input.file)
        if (const auto path = split_input(input.name).file; seen.insert(path).second) files.push_back(path);
    return files;
  }

  std::vector<std::string> remarks() const override { return remarks_; }

  ImageStatus read(std::size_t image, ImageView<double> out) const override {
    const Input& input = input_of(image);
    if (out.rows != shape_.rows || out.columns != shape_.columns)
      throw Error(ErrorCode::invalid_argument,
                  fmt::format("an image of {} x {} pixels (rows x columns) was to be read into a view of {} x {}",
                              shape_.rows, shape_.columns, out.rows, out.columns));
    if (!input.file) return {input.reason};
    const std::size_t page = image - input.first_image;
    try {
      if (const FrameShape shape = input.file->read(page, out); shape != shape_)
        return {fmt::format("{}: has {} x {} pixels (rows x columns), the stack's first image has {} x {}", name(image),
                            shape.rows, shape.columns, shape_.rows, shape_.columns)};
    } catch (const Error& error) {
      if (error.code() != ErrorCode::bad_input) throw;
      return {error.what()};
    }
    return {};
  }

 private:
  void add(const std::string& name, const OpenOptions& options, bool only_one) {
    Input input;
    input.name = name;
    input.first_image = images_;
    try {
      input.file = open_image_file(name, options);
    } catch (const Error& error) {
      if (only_one || error.code() != ErrorCode::bad_input) throw;
      input.reason = error.what();
    }
    images_ += input.images();
    inputs_.push_back(std::move(input));
  }

  // The first page that tells its size gives the size of the stack.
  bool find_size() {
    for (auto& input : inputs_) {
      if (!input.file) continue;
      for (std::size_t page = 0; page < input.file->pages(); ++page) {
        try {
          shape_ = input.file->shape(page);
          return true;
        } catch (const Error& error) {
          if (input.reason.empty()) input.reason = error.what();
        }
      }
    }
    return false;
  }

  void find_pixel_size(const OpenOptions& options) {
    std::string from;
    for (const auto& input : inputs_) {
      if (!input.file) continue;
      const PixelSize size = input.file->pixel_size();
      if (!size.known()) continue;
      if (from.empty()) {
        pixel_size_ = size;
        from = input.name;
      } else if (!options.pixel_size && (size.value != pixel_size_.value || size.unit != pixel_size_.unit)) {
        remarks_.push_back(fmt::format("{}: pixel size {} {} differs from {} {} of {}, which is used", input.name,
                                       size.value, size.unit, pixel_size_.value, pixel_size_.unit, from));
        break;
      }
    }
    if (options.pixel_size) pixel_size_ = *options.pixel_size;
  }

  // A remark that many files deserve is made once, with their number.
  void collect_remarks() {
    std::vector<std::pair<std::string, std::string>> order;  // remark, first file
    std::map<std::string, std::size_t> counts;
    for (const auto& input : inputs_) {
      if (!input.file) continue;
      for (const auto& remark : input.file->remarks())
        if (counts[remark]++ == 0) order.emplace_back(remark, input.name);
    }
    for (const auto& [remark, first] : order) {
      const std::size_t others = counts[remark] - 1;
      remarks_.push_back(others == 0 ? fmt::format("{}: {}", first, remark)
                                     : fmt::format("{} and {} more: {}", first, others, remark));
    }
  }

  const Input& input_of(std::size_t image) const {
    require(image < images_, "the image number", image, fmt::format("0 to {}", images_ - 1));
    const auto behind =
        std::upper_bound(inputs_.begin(), inputs_.end(), image,
                         [](std::size_t number, const Input& input) { return number < input.first_image; });
    return *(behind - 1);
  }

  std::vector<Input> inputs_;
  std::size_t images_ = 0;
  FrameShape shape_;
  PixelSize pixel_size_;
  std::vector<std::string> remarks_;
};

}  // namespace

std::unique_ptr<FileSource> open_images(const std::vector<std::string>& inputs, const OpenOptions& options) {
  require(!options.channel || *options.channel >= 0, "the channel", options.channel.value_or(0), "0 or more");
  return std::make_unique<ImageStack>(expand_lists(inputs), options);
}

}  // namespace tambour
