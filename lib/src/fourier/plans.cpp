#include "fourier/plans.hpp"

#include <fftw3.h>

#include <mutex>

#include "fourier/buffer.hpp"
#include "tambour/error.hpp"

namespace tambour::fourier {
namespace {

// FFTW's planner keeps global state. Its own lock is switched on once, so that we and a host program that plans in
// threads of its own are kept apart as well.
void make_planner_safe() {
  static std::once_flag once;
  std::call_once(once, [] {
    fftw_make_planner_thread_safe();
    fftwf_make_planner_thread_safe();
  });
}

template <class T>
struct Api;

template <>
struct Api<double> {
  using Plan = fftw_plan;
  using Complex = fftw_complex;
  static constexpr auto r2r = fftw_plan_many_r2r;
  static constexpr auto r2c = fftw_plan_many_dft_r2c;
  static constexpr auto c2r = fftw_plan_many_dft_c2r;
  static constexpr auto run_r2r = fftw_execute_r2r;
  static constexpr auto run_r2c = fftw_execute_dft_r2c;
  static constexpr auto run_c2r = fftw_execute_dft_c2r;
  static constexpr auto destroy = fftw_destroy_plan;
};

template <>
struct Api<float> {
  using Plan = fftwf_plan;
  using Complex = fftwf_complex;
  static constexpr auto r2r = fftwf_plan_many_r2r;
  static constexpr auto r2c = fftwf_plan_many_dft_r2c;
  static constexpr auto c2r = fftwf_plan_many_dft_c2r;
  static constexpr auto run_r2r = fftwf_execute_r2r;
  static constexpr auto run_r2c = fftwf_execute_dft_r2c;
  static constexpr auto run_c2r = fftwf_execute_dft_c2r;
  static constexpr auto destroy = fftwf_destroy_plan;
};

template <class T>
typename Api<T>::Complex* raw(std::complex<T>* data) {
  return reinterpret_cast<typename Api<T>::Complex*>(data);
}

fftw_r2r_kind fftw_kind(RealKind kind) {
  switch (kind) {
    case RealKind::cosine2:
      return FFTW_REDFT10;
    case RealKind::cosine3:
      return FFTW_REDFT01;
    case RealKind::sine3:
      return FFTW_RODFT01;
  }
  throw Error(ErrorCode::internal, "unknown kind of real transform");
}

}  // namespace

namespace detail {

template <class T>
class Plan {
 public:
  /// `make` returns the FFTW plan.
  template <class Make>
  explicit Plan(const Make& make) {
    make_planner_safe();
    plan_ = make();
    if (!plan_) throw Error(ErrorCode::internal, "FFTW could not make a plan");
  }
  ~Plan() { Api<T>::destroy(plan_); }
  Plan(const Plan&) = delete;
  Plan& operator=(const Plan&) = delete;

  typename Api<T>::Plan get() const { return plan_; }

 private:
  typename Api<T>::Plan plan_;
};

}  // namespace detail

template <class T>
LineTransform<T>::LineTransform(RealKind kind, int n, int lines, int in_stride, int out_stride) {
  AlignedBuffer<T> in(static_cast<std::size_t>(in_stride) * lines), out(static_cast<std::size_t>(out_stride) * lines);
  const fftw_r2r_kind fftw = fftw_kind(kind);
  plan_ = std::make_shared<detail::Plan<T>>([&] {
    return Api<T>::r2r(1, &n, lines, in.data(), nullptr, 1, in_stride, out.data(), nullptr, 1, out_stride, &fftw,
                       FFTW_ESTIMATE);
  });
}

template <class T>
void LineTransform<T>::run(T* in, T* out) const {
  Api<T>::run_r2r(plan_->get(), in, out);
}

template <class T>
ForwardFft<T>::ForwardFft(int n, int lines, int in_stride, int out_stride) {
  AlignedBuffer<T> in(static_cast<std::size_t>(in_stride) * lines);
  AlignedBuffer<std::complex<T>> out(static_cast<std::size_t>(out_stride) * lines);
  plan_ = std::make_shared<detail::Plan<T>>([&] {
    return Api<T>::r2c(1, &n, lines, in.data(), nullptr, 1, in_stride, raw(out.data()), nullptr, 1, out_stride,
                       FFTW_ESTIMATE | FFTW_PRESERVE_INPUT);
  });
}

template <class T>
void ForwardFft<T>::run(T* in, std::complex<T>* out) const {
  Api<T>::run_r2c(plan_->get(), in, raw(out));
}

template <class T>
BackwardFft<T>::BackwardFft(int n, int lines, int in_stride, int out_stride) {
  AlignedBuffer<std::complex<T>> in(static_cast<std::size_t>(in_stride) * lines);
  AlignedBuffer<T> out(static_cast<std::size_t>(out_stride) * lines);
  plan_ = std::make_shared<detail::Plan<T>>([&] {
    return Api<T>::c2r(1, &n, lines, raw(in.data()), nullptr, 1, in_stride, out.data(), nullptr, 1, out_stride,
                       FFTW_ESTIMATE);
  });
}

template <class T>
void BackwardFft<T>::run(std::complex<T>* in, T* out) const {
  Api<T>::run_c2r(plan_->get(), raw(in), out);
}

template <class T>
ImageFft<T>::ImageFft(int rows, int columns) {
  AlignedBuffer<T> real(static_cast<std::size_t>(rows) * columns);
  AlignedBuffer<std::complex<T>> half(static_cast<std::size_t>(rows) * (columns / 2 + 1));
  const int size[2] = {rows, columns};
  forward_ = std::make_shared<detail::Plan<T>>([&] {
    return Api<T>::r2c(2, size, 1, real.data(), nullptr, 1, 0, raw(half.data()), nullptr, 1, 0,
                       FFTW_ESTIMATE | FFTW_PRESERVE_INPUT);
  });
  backward_ = std::make_shared<detail::Plan<T>>([&] {
    return Api<T>::c2r(2, size, 1, raw(half.data()), nullptr, 1, 0, real.data(), nullptr, 1, 0, FFTW_ESTIMATE);
  });
}

template <class T>
void ImageFft<T>::forward(T* in, std::complex<T>* out) const {
  Api<T>::run_r2c(forward_->get(), in, raw(out));
}

template <class T>
void ImageFft<T>::backward(std::complex<T>* in, T* out) const {
  Api<T>::run_c2r(backward_->get(), raw(in), out);
}

std::string fftw_library_version() { return fftw_version; }

template class LineTransform<float>;
template class LineTransform<double>;
template class ForwardFft<float>;
template class ForwardFft<double>;
template class BackwardFft<float>;
template class BackwardFft<double>;
template class ImageFft<float>;
template class ImageFft<double>;

}  // namespace tambour::fourier
