// Views of arrays owned by somebody else: no copies, no ownership, strides in elements.
#pragma once

#include <cstddef>
#include <type_traits>

namespace tambour {

/// Rows x columns of T. A row is contiguous; rows lie row_stride elements apart.
template <class T>
struct MatrixView {
  T* data = nullptr;
  std::ptrdiff_t rows = 0;
  std::ptrdiff_t columns = 0;
  std::ptrdiff_t row_stride = 0;

  MatrixView() = default;
  MatrixView(T* first, std::ptrdiff_t row_count, std::ptrdiff_t column_count)
      : MatrixView(first, row_count, column_count, column_count) {}
  MatrixView(T* first, std::ptrdiff_t row_count, std::ptrdiff_t column_count, std::ptrdiff_t stride)
      : data(first), rows(row_count), columns(column_count), row_stride(stride) {}

  /// A view of non-const elements serves wherever a view of const ones is asked for.
  template <class U>
  requires std::is_same_v<const U, T> MatrixView(const MatrixView<U>& other)  // NOLINT(google-explicit-constructor)
      : MatrixView(other.data, other.rows, other.columns, other.row_stride) {}

  T* row(std::ptrdiff_t y) const { return data + y * row_stride; }
  T& operator()(std::ptrdiff_t y, std::ptrdiff_t x) const { return row(y)[x]; }
};

/// One image: row-major, x = column to the right, y = row downwards, pixel centres at integers.
template <class T>
using ImageView = MatrixView<T>;

/// Images x rows x columns of T.
template <class T>
struct StackView {
  T* data = nullptr;
  std::ptrdiff_t images = 0;
  std::ptrdiff_t rows = 0;
  std::ptrdiff_t columns = 0;
  std::ptrdiff_t image_stride = 0;
  std::ptrdiff_t row_stride = 0;

  StackView() = default;
  StackView(T* first, std::ptrdiff_t image_count, std::ptrdiff_t row_count, std::ptrdiff_t column_count)
      : StackView(first, image_count, row_count, column_count, row_count * column_count, column_count) {}
  StackView(T* first, std::ptrdiff_t image_count, std::ptrdiff_t row_count, std::ptrdiff_t column_count,
            std::ptrdiff_t between_images, std::ptrdiff_t between_rows)
      : data(first),
        images(image_count),
        rows(row_count),
        columns(column_count),
        image_stride(between_images),
        row_stride(between_rows) {}

  template <class U>
  requires std::is_same_v<const U, T> StackView(const StackView<U>& other)  // NOLINT(google-explicit-constructor)
      : StackView(other.data, other.images, other.rows, other.columns, other.image_stride, other.row_stride) {}

  ImageView<T> operator[](std::ptrdiff_t image) const {
    return {data + image * image_stride, rows, columns, row_stride};
  }
};

}  // namespace tambour
