// A plain Fourier transform for making test noise: any length, no speed claimed.
#pragma once

#include <complex>
#include <cstddef>
#include <vector>

namespace tambour::tools::phantom {

enum class Direction { forward, backward };

/// In place, row-major, unnormalised: forward multiplies by e^{-i q x}, backward by e^{+i q x}.
/// Cost: rows * columns * (sum of the prime factors of both).
void fourier_2d(std::vector<std::complex<double>>& values, std::ptrdiff_t rows, std::ptrdiff_t columns,
                Direction direction);

}  // namespace tambour::tools::phantom
