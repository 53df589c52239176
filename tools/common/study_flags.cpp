#include "common/study_flags.hpp"

#include <fmt/format.h>

#include "common/parse.hpp"
#include "tambour/error.hpp"

namespace tambour::tools {

void StudyFlags::add_batch(CommandLine& line) {
  line.add_integer("--batch", batch_, 0, 1'000'000,
                   "Images held in memory at once, 0 = 16 per thread; results do not depend on it");
}

void StudyFlags::add_search(CommandLine& line) {
  line.add_number("--search", search_, "Centres are looked for within this many pixels of the frame's middle");
  line.add_check([this] { search(); });
}

void StudyFlags::add_precision(CommandLine& line) {
  line.add_choice("--precision", precision_, {"single", "double"},
                  "Error of a transform: 1e-6 (single) or 1e-12 (double) of the largest coefficient");
}

double StudyFlags::search() const {
  constexpr double least = 1, most = 64;
  if (!(search_ >= least && search_ <= most))
    throw Error(ErrorCode::invalid_argument,
                fmt::format("--search is {:.6g}; allowed is {} to {} px", search_, least, most));
  return search_;
}

void StudyFlags::apply(StackStudyOptions& options) const {
  options.search = search();
  options.double_precision = precision_ == "double";
  options.batch = static_cast<std::size_t>(batch_);
  refuse_if_any(options.problems());
}

}  // namespace tambour::tools
