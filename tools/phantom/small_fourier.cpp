#include "phantom/small_fourier.hpp"

#include <numbers>

namespace tambour::tools::phantom {
namespace {

using Complex = std::complex<double>;

std::size_t smallest_factor(std::size_t n) {
  for (std::size_t p = 2; p * p <= n; ++p)
    if (n % p == 0) return p;
  return n;
}

/// Decimation in time: out[0 .. n) from in[0], in[stride], …; roots[k] = e^{+-2 pi i k / total}, total = n * stride.
void transform(const Complex* in, std::size_t stride, std::size_t n, Complex* out, const std::vector<Complex>& roots) {
  if (n == 1) {
    out[0] = in[0];
    return;
  }
  const std::size_t p = smallest_factor(n);
  const std::size_t m = n / p;
  for (std::size_t part = 0; part < p; ++part) transform(in + part * stride, stride * p, m, out + part * m, roots);
  std::vector<Complex> column(p);
  for (std::size_t k = 0; k < m; ++k) {
    for (std::size_t part = 0; part < p; ++part) column[part] = out[part * m + k];
    for (std::size_t block = 0; block < p; ++block) {
      Complex sum = 0;
      for (std::size_t part = 0; part < p; ++part)
        sum += column[part] * roots[part * (k + block * m) * stride % roots.size()];
      out[block * m + k] = sum;
    }
  }
}

std::vector<Complex> roots_of_unity(std::size_t n, Direction direction) {
  const double sign = direction == Direction::forward ? -1 : 1;
  std::vector<Complex> roots(n);
  for (std::size_t k = 0; k < n; ++k)
    roots[k] = std::polar(1.0, sign * 2 * std::numbers::pi * static_cast<double>(k) / static_cast<double>(n));
  return roots;
}

}  // namespace

void fourier_2d(std::vector<Complex>& values, std::ptrdiff_t rows, std::ptrdiff_t columns, Direction direction) {
  const auto height = static_cast<std::size_t>(rows);
  const auto width = static_cast<std::size_t>(columns);
  std::vector<Complex> line(width);
  const auto along_rows = roots_of_unity(width, direction);
  for (std::size_t y = 0; y < height; ++y) {
    transform(&values[y * width], 1, width, line.data(), along_rows);
    for (std::size_t x = 0; x < width; ++x) values[y * width + x] = line[x];
  }
  line.assign(height, 0);
  std::vector<Complex> result(height);
  const auto along_columns = roots_of_unity(height, direction);
  for (std::size_t x = 0; x < width; ++x) {
    for (std::size_t y = 0; y < height; ++y) line[y] = values[y * width + x];
    transform(line.data(), 1, height, result.data(), along_columns);
    for (std::size_t y = 0; y < height; ++y) values[y * width + x] = result[y];
  }
}

}  // namespace tambour::tools::phantom
