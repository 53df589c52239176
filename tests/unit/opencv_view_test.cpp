#include "tambour/opencv.hpp"

#include <gtest/gtest.h>

namespace tambour {
namespace {

TEST(OpencvView, SharesThePixelsOfAMatrixAndOfAPartOfIt) {
  cv::Mat matrix(4, 6, CV_32FC1);
  for (int y = 0; y < 4; ++y)
    for (int x = 0; x < 6; ++x) matrix.at<float>(y, x) = static_cast<float>(10 * y + x);
  cv::Mat part = matrix(cv::Rect(2, 1, 3, 2));
  const ImageView<float> view = image_view<float>(part);
  EXPECT_EQ(view.rows, 2);
  EXPECT_EQ(view.columns, 3);
  EXPECT_EQ(view.row_stride, 6);
  EXPECT_EQ(view(1, 2), 24);
  view(0, 0) = -1;
  EXPECT_EQ(matrix.at<float>(1, 2), -1);
  const cv::Mat& constant = matrix;
  EXPECT_EQ(image_view<float>(constant)(3, 5), 35);
}

TEST(OpencvView, RefusesOtherTypesAndChannels) {
  cv::Mat bytes(4, 4, CV_8UC1), colour(4, 4, CV_32FC3), precise(4, 4, CV_64FC1);
  EXPECT_THROW(image_view<float>(bytes), Error);
  EXPECT_THROW(image_view<float>(colour), Error);
  EXPECT_THROW(image_view<float>(precise), Error);
  EXPECT_EQ(image_view<double>(precise).rows, 4);
}

}  // namespace
}  // namespace tambour
