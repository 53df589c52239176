#include "common/progress_bar.hpp"

#include <fmt/format.h>
#include <unistd.h>

#include <algorithm>
#include <iostream>

#include "common/interrupt.hpp"

namespace tambour::tools {

void ProgressBar::advance(std::string_view stage, std::size_t done, std::size_t total) {
  if (stream_ == nullptr || total == 0) return;
  constexpr std::size_t width = 40;
  const std::size_t part = std::min(done, total) * width / total;
  const std::string line = fmt::format("{:<12} [{}{}] {:3d} % of {}", stage, std::string(part, '#'),
                                       std::string(width - part, '.'), std::min(done, total) * 100 / total, total);
  if (line == drawn_) return;
  *stream_ << '\r' << line << "\x1b[K" << std::flush;
  drawn_ = line;
}

bool ProgressBar::stop_requested() const { return interrupt_signal() != 0; }

void ProgressBar::clear() {
  if (stream_ == nullptr || drawn_.empty()) return;
  *stream_ << "\r\x1b[K" << std::flush;
  drawn_.clear();
}

std::ostream* terminal_or_null(std::ostream& err) {
  return &err == &std::cerr && isatty(STDERR_FILENO) == 1 ? &err : nullptr;
}

}  // namespace tambour::tools
