// Walks through a coefficient file in batches.
#pragma once

#include <complex>
#include <cstddef>
#include <functional>
#include <span>
#include <string_view>
#include <vector>

#include "common/session.hpp"
#include "tambour/coefficient_file.hpp"
#include "tambour/noise.hpp"

namespace tambour::tools {

struct CoefficientBatch {
  std::size_t first = 0;
  std::vector<CoefficientRecord> records;
  MatrixView<const std::complex<double>> coefficients;  ///< images x terms

  std::size_t size() const noexcept { return records.size(); }
  std::span<const std::complex<double>> of(std::size_t i) const {
    return {coefficients.row(static_cast<std::ptrdiff_t>(i)), static_cast<std::size_t>(coefficients.columns)};
  }
};

/// Calls `take` for every batch in order; skipped images stay in it. Throws
/// Error(interrupted) between batches when a signal has arrived.
void for_each_batch(const CoefficientReader& reader, std::string_view stage, Session& session,
                    const std::function<void(const CoefficientBatch&)>& take);

/// Throws Error(bad_input) for a file without images.
void require_images(const CoefficientReader& reader, const std::string& path);

/// Tells the session of the skipped images of a batch.
void name_skipped(const CoefficientBatch& batch, Session& session);

/// The noise spectrum of one image; empty when the file holds none for it.
NoiseSpectrum noise_of(const CoefficientHeader& header, const CoefficientRecord& record);

}  // namespace tambour::tools
