#include "disk/upsampling.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

namespace tambour::disk {
namespace {

using fourier::aligned_count;
using std::numbers::pi;

/// Index within 0 .. n-1 of a half-sample mirrored sequence, and whether an odd number of mirrors was crossed.
struct Mirrored {
  int index;
  bool odd;
};

Mirrored mirror(int index, int n) {
  bool odd = false;
  while (index < 0 || index >= n) {
    index = index < 0 ? -1 - index : 2 * n - 1 - index;
    odd = !odd;
  }
  return {index, odd};
}

}  // namespace

FineAxis::FineAxis(int image_size, double oversampling, double centre, double reach, const GriddingKernel& kernel)
    : size(image_size), fine_size(fourier::next_fast_size(image_size * oversampling, 2)) {
  const double factor = static_cast<double>(fine_size) / size;
  first = GriddingKernel::first_point(fine(centre) - reach * factor, kernel.width()) - 1;
  const int last = GriddingKernel::first_point(fine(centre) + reach * factor, kernel.width()) + kernel.width();
  count = last - first + 1;
  deconvolution.resize(size);
  for (int p = 0; p < size; ++p) deconvolution[p] = 1 / (2 * size * kernel.transform(pi * p / fine_size));
}

template <class T>
Upsampling<T>::Upsampling(int rows, int columns, double reach, double oversampling, const GriddingKernel& kernel)
    : x_(columns, oversampling, frame_middle(rows, columns).x, reach, kernel),
      y_(rows, oversampling, frame_middle(rows, columns).y, reach, kernel),
      middle_stride_(static_cast<int>(aligned_count<T>(rows))),
      fine_stride_(static_cast<int>(aligned_count<T>(x_.count))),
      along_x_(make_pass(x_, rows)),
      along_y_(make_pass(y_, x_.count)) {}

template <class T>
typename Upsampling<T>::Pass Upsampling<T>::make_pass(const FineAxis& axis, int lines) const {
  const int in = static_cast<int>(aligned_count<T>(axis.size));
  const int fine = static_cast<int>(aligned_count<T>(axis.fine_size));
  using fourier::LineTransform;
  using fourier::RealKind;
  return {LineTransform<T>(RealKind::cosine2, axis.size, lines, in, in),
          LineTransform<T>(RealKind::cosine3, axis.fine_size, lines, fine, fine),
          LineTransform<T>(RealKind::sine3, axis.fine_size, lines, fine, fine),
          &axis,
          lines,
          in,
          in,
          fine};
}

template <class T>
typename Upsampling<T>::Scratch Upsampling<T>::make_scratch() const {
  const auto largest = [&](int x_stride, int y_stride) {
    return std::max(static_cast<std::size_t>(x_stride) * along_x_.lines,
                    static_cast<std::size_t>(y_stride) * along_y_.lines);
  };
  const std::size_t in = largest(along_x_.in_stride, along_y_.in_stride);
  const std::size_t fine = largest(along_x_.fine_stride, along_y_.fine_stride);
  using Buffer = fourier::AlignedBuffer<T>;
  return {Buffer(in),
          Buffer(in),
          Buffer(fine),
          Buffer(fine),
          Buffer(fine),
          Buffer(fine),
          Buffer(static_cast<std::size_t>(middle_stride_) * x_.count),
          Buffer(static_cast<std::size_t>(fine_stride_) * y_.count)};
}

template <class T>
void Upsampling<T>::run_pass(const Pass& pass, double shift, T* in, T* out, int out_stride, Scratch& scratch) const {
  const FineAxis& axis = *pass.axis;
  pass.forward.run(in, scratch.spectrum.data());

  const bool shifted = shift != 0;
  std::vector<T> cosine_factor(axis.size), sine_factor(axis.size);
  for (int p = 0; p < axis.size; ++p) {
    cosine_factor[p] = static_cast<T>(axis.deconvolution[p] * std::cos(pi * p * shift / axis.size));
    sine_factor[p] = static_cast<T>(axis.deconvolution[p] * std::sin(pi * p * shift / axis.size));
  }
  for (int line = 0; line < pass.lines; ++line) {
    const T* spectrum = scratch.spectrum.data() + static_cast<std::size_t>(line) * pass.spectrum_stride;
    T* cosine = scratch.cosine_in.data() + static_cast<std::size_t>(line) * pass.fine_stride;
    for (int p = 0; p < axis.size; ++p) cosine[p] = spectrum[p] * cosine_factor[p];
    std::fill(cosine + axis.size, cosine + axis.fine_size, T(0));
    if (!shifted) continue;
    T* sine = scratch.sine_in.data() + static_cast<std::size_t>(line) * pass.fine_stride;
    for (int p = 1; p < axis.size; ++p) sine[p - 1] = spectrum[p] * sine_factor[p];
    std::fill(sine + axis.size - 1, sine + axis.fine_size, T(0));
  }
  pass.cosine.run(scratch.cosine_in.data(), scratch.cosine_out.data());
  if (shifted) pass.sine.run(scratch.sine_in.data(), scratch.sine_out.data());

  for (int i = 0; i < axis.count; ++i) {
    const Mirrored from = mirror(axis.first + i, axis.fine_size);
    T* to = out + static_cast<std::size_t>(i) * out_stride;
    const T* cosine = scratch.cosine_out.data() + from.index;
    if (!shifted) {
      for (int line = 0; line < pass.lines; ++line)
        to[line] = cosine[static_cast<std::size_t>(line) * pass.fine_stride];
      continue;
    }
    const T sign = from.odd ? T(1) : T(-1);  // the sine part is odd about the ends
    const T* sine = scratch.sine_out.data() + from.index;
    for (int line = 0; line < pass.lines; ++line) {
      const std::size_t at = static_cast<std::size_t>(line) * pass.fine_stride;
      to[line] = cosine[at] + sign * sine[at];
    }
  }
}

template <class T>
void Upsampling<T>::run(ImageView<const T> image, double shift_x, double shift_y, Scratch& scratch) const {
  for (int y = 0; y < along_x_.lines; ++y)
    std::copy_n(image.row(y), x_.size, scratch.lines.data() + static_cast<std::size_t>(y) * along_x_.in_stride);
  run_pass(along_x_, shift_x, scratch.lines.data(), scratch.middle.data(), middle_stride_, scratch);
  // The first pass leaves lines of y, one per fine x, spaced as the second pass reads them.
  run_pass(along_y_, shift_y, scratch.middle.data(), scratch.fine.data(), fine_stride_, scratch);
}

template class Upsampling<float>;
template class Upsampling<double>;

}  // namespace tambour::disk
