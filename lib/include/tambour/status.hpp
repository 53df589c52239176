// What became of one image of a batch.
#pragma once

#include <string>

namespace tambour {

/// `ok`, or the reason why an image was skipped. Batch calls return one per image instead of throwing.
struct ImageStatus {
  std::string reason;  ///< empty = ok; else a short sentence with the offending value and what is allowed

  bool ok() const noexcept { return reason.empty(); }
  /// The text of the `status` column of every table.
  std::string text() const { return ok() ? "ok" : reason; }
};

}  // namespace tambour
