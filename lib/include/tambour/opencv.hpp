// Views of OpenCV matrices, for programs that use both. The one public header that needs OpenCV.
#pragma once

#include <opencv2/core.hpp>
#include <type_traits>

#include "tambour/error.hpp"
#include "tambour/views.hpp"

namespace tambour {

/// View of a two-dimensional single-channel matrix of T = float or double (CV_32FC1, CV_64FC1); no copy, the matrix
/// stays the owner. Throws Error(invalid_argument) on another type, on more dimensions, or when rows do not start at
/// whole elements.
template <class T>
ImageView<T> image_view(cv::Mat& matrix) {
  using Value = std::remove_const_t<T>;
  if (matrix.dims != 2 || matrix.type() != cv::traits::Type<Value>::value)
    throw Error(ErrorCode::invalid_argument,
                "the matrix has another type, number of channels or dimensions than asked for");
  if (matrix.step[0] % sizeof(Value) != 0)
    throw Error(ErrorCode::invalid_argument, "the matrix' rows do not start at whole elements");
  return {matrix.ptr<Value>(), matrix.rows, matrix.cols, static_cast<std::ptrdiff_t>(matrix.step[0] / sizeof(Value))};
}

/// The same of a matrix that is only read.
template <class T>
ImageView<const T> image_view(const cv::Mat& matrix) {
  cv::Mat header = matrix;  // shares the pixels
  return image_view<T>(header);
}

}  // namespace tambour
