// A pixel's value from its samples: one of them, or a weighted sum.
#pragma once

#include <cstddef>
#include <vector>

#include "files/frame_checks.hpp"

namespace tambour {

/// `decode_sample(sample, to)` decodes that sample of a row's pixels. Sets `out` to the weighted sum; `scratch` has
/// room for a row.
template <class DecodeSample>
void mix_samples(const std::vector<SampleWeight>& weights, std::ptrdiff_t columns, double* scratch, double* out,
                 const DecodeSample& decode_sample) {
  if (weights.size() == 1 && weights[0].weight == 1) return decode_sample(weights[0].sample, out);
  for (std::size_t i = 0; i < weights.size(); ++i) {
    decode_sample(weights[i].sample, scratch);
    for (std::ptrdiff_t x = 0; x < columns; ++x)
      out[x] = i == 0 ? weights[i].weight * scratch[x] : out[x] + weights[i].weight * scratch[x];
  }
}

}  // namespace tambour
