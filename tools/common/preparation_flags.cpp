#include "common/preparation_flags.hpp"

#include <fmt/format.h>

#include "tambour/error.hpp"

namespace tambour::tools {
namespace {

/// Enumerators in the order of their declaration; the names are the library's.
template <class Enum>
Enum enum_of(const std::string& name, std::initializer_list<Enum> all) {
  for (const Enum value : all)
    if (name == to_string(value)) return value;
  throw Error(ErrorCode::internal, fmt::format("no enumerator is named '{}'", name));
}

}  // namespace

void PreparationFlags::add_to(CommandLine& line, Background default_background) {
  background_ = to_string(default_background);
  line.add_choice("--background", background_, {"none", "constant", "linear", "quadratic"},
                  "Polynomial fitted outside the disk (R < r < 1.3 R) and subtracted everywhere");
  line.add_choice("--scaling", scaling_, {"none", "outside-sd"},
                  "Divide by the standard deviation outside the disk, or keep the image's units");
  line.add_flag("--invert-contrast", invert_, "Multiply by -1 first: dark objects on a bright field");
  line_ = &line;
}

PreparationOptions PreparationFlags::resolve(std::ptrdiff_t rows, std::ptrdiff_t columns, double radius,
                                             Session& session) const {
  PreparationOptions options;
  options.background =
      enum_of(background_, {Background::none, Background::constant, Background::linear, Background::quadratic});
  options.scaling = scaling_ == "none" ? Scaling::none : Scaling::outside_sd;
  options.invert_contrast = invert_;
  if (line_->given("--background") || options.background == Background::none ||
      Preparation::possible(rows, columns, radius))
    return options;
  options.background = Background::none;
  session.remark(fmt::format(
      "the frame of {} by {} px holds too few pixels outside a disk of radius {:.6g} px to fit a background: none is "
      "subtracted (as if --background none were given)",
      columns, rows, radius));
  return options;
}

}  // namespace tambour::tools
