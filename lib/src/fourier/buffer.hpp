// Memory aligned for FFTW's vector instructions.
#pragma once

#include <algorithm>
#include <cstddef>
#include <memory>
#include <new>

namespace tambour::fourier {

inline constexpr std::size_t alignment = 64;

/// Elements of T in one aligned block, zero at first. Moves, never copies.
template <class T>
class AlignedBuffer {
 public:
  AlignedBuffer() = default;
  explicit AlignedBuffer(std::size_t size)
      : size_(size),
        data_(
            static_cast<T*>(::operator new (std::max<std::size_t>(size, 1) * sizeof(T), std::align_val_t{alignment}))) {
    std::uninitialized_value_construct_n(data_.get(), size);
  }

  T* data() noexcept { return data_.get(); }
  const T* data() const noexcept { return data_.get(); }
  std::size_t size() const noexcept { return size_; }
  T& operator[](std::size_t i) noexcept { return data_.get()[i]; }
  const T& operator[](std::size_t i) const noexcept { return data_.get()[i]; }
  T* begin() noexcept { return data(); }
  T* end() noexcept { return data() + size_; }

 private:
  struct Free {
    void operator()(T* data) const noexcept { ::operator delete (data, std::align_val_t{alignment}); }
  };
  std::size_t size_ = 0;
  std::unique_ptr<T, Free> data_;
};

/// Smallest count >= `count` after which the next line of T starts aligned again.
template <class T>
constexpr std::size_t aligned_count(std::size_t count) {
  constexpr std::size_t step = alignment / sizeof(T);
  return (count + step - 1) / step * step;
}

/// Smallest integer >= `size` of the form 2^a 3^b 5^c that is a multiple of `multiple` (itself of that form).
inline int next_fast_size(double size, int multiple) {
  for (int candidate = multiple;; candidate += multiple) {
    if (candidate < size) continue;
    int rest = candidate;
    for (const int factor : {2, 3, 5})
      while (rest % factor == 0) rest /= factor;
    if (rest == 1) return candidate;
  }
}

}  // namespace tambour::fourier
