// FFTW plans behind RAII. Plans may be made, run and destroyed in any thread.
//
// Plans are made with FFTW_ESTIMATE, so that the same input gives the same bits in every run. Arrays given to run()
// must be as aligned as AlignedBuffer's.
#pragma once

#include <complex>
#include <memory>
#include <string>

namespace tambour::fourier {

/// One-dimensional real transforms of many lines, unnormalised as FFTW defines them (REDFT10, REDFT01, RODFT01).
enum class RealKind {
  cosine2,  ///< Y_k = 2 sum_j X_j cos(pi (j + 1/2) k / n)
  cosine3,  ///< Y_k = X_0 + 2 sum_{j>0} X_j cos(pi j (k + 1/2) / n)
  sine3     ///< Y_k = (-1)^k X_{n-1} + 2 sum_{j<n-1} X_j sin(pi (j + 1) (k + 1/2) / n)
};

namespace detail {
template <class T>
class Plan;
}

/// `lines` transforms of n contiguous reals; line l starts at l * in_stride and l * out_stride. Not in place.
template <class T>
class LineTransform {
 public:
  LineTransform(RealKind kind, int n, int lines, int in_stride, int out_stride);
  void run(T* in, T* out) const;

 private:
  std::shared_ptr<const detail::Plan<T>> plan_;
};

/// Forward transforms out[k] = sum_j in[j] e^{-2 pi i j k / n}, k = 0 .. n/2, of `lines` lines. Keeps its input.
template <class T>
class ForwardFft {
 public:
  ForwardFft(int n, int lines, int in_stride, int out_stride);
  void run(T* in, std::complex<T>* out) const;

 private:
  std::shared_ptr<const detail::Plan<T>> plan_;
};

/// Backward transforms out[j] = in[0] + 2 Re sum_k in[k] e^{+2 pi i j k / n} of `lines` lines. Destroys its input.
template <class T>
class BackwardFft {
 public:
  BackwardFft(int n, int lines, int in_stride, int out_stride);
  void run(std::complex<T>* in, T* out) const;

 private:
  std::shared_ptr<const detail::Plan<T>> plan_;
};

/// Two-dimensional transforms of a contiguous rows x columns image to and from rows x (columns / 2 + 1), unnormalised.
template <class T>
class ImageFft {
 public:
  ImageFft(int rows, int columns);
  void forward(T* in, std::complex<T>* out) const;
  void backward(std::complex<T>* in, T* out) const;  ///< destroys its input

 private:
  std::shared_ptr<const detail::Plan<T>> forward_;
  std::shared_ptr<const detail::Plan<T>> backward_;
};

/// Version text of the FFTW library.
std::string fftw_library_version();

}  // namespace tambour::fourier
