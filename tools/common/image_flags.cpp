#include "common/image_flags.hpp"

#include <fmt/format.h>

#include "tambour/error.hpp"

namespace tambour::tools {
namespace {

constexpr std::int64_t most_channels = 4;
constexpr std::ptrdiff_t smallest_side = 8;
constexpr std::ptrdiff_t largest_side = 16384;

}  // namespace

std::optional<PixelSize> pixel_size_of(const std::optional<double>& value, const std::string& unit) {
  if (!value) {
    if (!unit.empty()) throw Error(ErrorCode::invalid_argument, "--unit is given without --pixel-size");
    return std::nullopt;
  }
  if (!(*value > 0))
    throw Error(ErrorCode::invalid_argument, fmt::format("--pixel-size is {}; allowed is a number above 0", *value));
  return PixelSize{*value, unit.empty() ? "angstrom" : unit};
}

void ImageFlags::add_to(CommandLine& line) {
  line.add_inputs("images", inputs_,
                  "PNG, JPEG, TIFF, MRC, .npy, HDF5 (file.h5::/dataset) or @list.txt; several make one stack");
  line.add_integer("--channel", channel_, 0, most_channels - 1, "Channel of colour images, red = 0 (default: luma)");
  line.add_number("--pixel-size", pixel_size_, "Size of a pixel, instead of what the files tell");
  line.add_text("--unit", unit_, "UNIT", "Unit of --pixel-size: angstrom (default), nanometre, micrometre, …");
  line.add_check([this] { pixel_size_of(pixel_size_, unit_); });
}

std::unique_ptr<FileSource> ImageFlags::open(Session& session) const {
  OpenOptions options;
  if (channel_) options.channel = static_cast<int>(*channel_);
  options.pixel_size = pixel_size_of(pixel_size_, unit_);
  auto source = open_images(inputs_, options);
  session.refuse_as_output(source->files());
  for (std::string input : inputs_) session.refuse_as_output({input.substr(input.starts_with('@') ? 1 : 0)});
  for (const auto& remark : source->remarks()) session.remark(remark);
  const auto fits = [](std::ptrdiff_t side) { return smallest_side <= side && side <= largest_side; };
  if (!fits(source->rows()) || !fits(source->columns()))
    throw Error(ErrorCode::bad_input,
                fmt::format("{}: images are {} rows by {} columns; allowed are {} to {} each", source->name(0),
                            source->rows(), source->columns(), smallest_side, largest_side));
  return source;
}

}  // namespace tambour::tools
