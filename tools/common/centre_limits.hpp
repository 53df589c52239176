// Centres on the border of the searched square, which may lie beyond it.
#pragma once

#include <cstddef>
#include <vector>

#include "common/session.hpp"
#include "tambour/stack_study.hpp"

namespace tambour::tools {

/// Collects them while batches pass by and tells the session, with what would help.
class CentreLimits {
 public:
  CentreLimits(double search, double radius, std::ptrdiff_t rows, std::ptrdiff_t columns);

  /// Half width of the square that is searched, px: what was asked for, cut where the disk would leave the frame.
  double searched() const noexcept { return searched_; }
  void see(const ImageStudy& study);
  void report(Session& session) const;

 private:
  double asked_;
  double searched_;
  std::vector<std::size_t> images_;
};

}  // namespace tambour::tools
