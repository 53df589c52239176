// The way back from a prepared image to the units of the file it came from.
#pragma once

#include "tambour/coefficient_file.hpp"
#include "tambour/views.hpp"

namespace tambour::tools::synthesise {

/// Throws Error(bad_input) when what the preparation did cannot be undone from what the file holds.
void require_restorable(const std::string& path, const PreparationOptions& preparation);

/// Adds the polynomial that was subtracted, over the whole frame, then turns the contrast back.
void restore_background(const CoefficientHeader& header, const CoefficientRecord& record, ImageView<double> image);

}  // namespace tambour::tools::synthesise
