#include "common/centre_limits.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <cmath>

namespace tambour::tools {

CentreLimits::CentreLimits(double search, double radius, std::ptrdiff_t rows, std::ptrdiff_t columns)
    : asked_(std::floor(search)),
      searched_(std::min(asked_, std::floor(static_cast<double>(std::min(rows, columns)) / 2 - radius))) {}

void CentreLimits::see(const ImageStudy& study) {
  if (study.status.ok() && study.centre.at_search_limit) images_.push_back(study.image);
}

void CentreLimits::report(Session& session) const {
  session.result("at_search_limit", images_);
  if (images_.empty()) return;
  constexpr std::size_t named = 10;
  std::string first = fmt::format("{}", images_.front());
  for (std::size_t i = 1; i < images_.size() && i < named; ++i) first += fmt::format(", {}", images_[i]);
  session.remark(
      fmt::format("{} of the centres lie on the border of the searched square of +-{:.6g} px and may lie beyond; their "
                  "errors and verdicts "
                  "are not to be trusted (image {}{}): {}",
                  images_.size(), searched_, first, images_.size() > named ? ", …" : "",
                  searched_ < asked_ ? "the frame leaves the disk no more room, a smaller --radius does"
                                     : "a larger --search tells"));
}

}  // namespace tambour::tools
