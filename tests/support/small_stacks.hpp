// Small stacks and text files for the tests of the files room.
#pragma once

#include <gtest/gtest.h>

#include <fstream>
#include <functional>
#include <string>
#include <vector>

#include "tambour/error.hpp"
#include "tambour/files.hpp"

namespace tambour {

struct Picture {
  Picture(std::ptrdiff_t row_count, std::ptrdiff_t column_count, double seed = 0)
      : rows(row_count), columns(column_count), pixels(static_cast<std::size_t>(row_count * column_count)) {
    // Quarters are exact in 32-bit floats, too.
    for (std::size_t i = 0; i < pixels.size(); ++i) pixels[i] = seed * 100 + static_cast<double>(i) / 4 - 20;
  }
  ImageView<double> view() { return {pixels.data(), rows, columns}; }

  std::ptrdiff_t rows, columns;
  std::vector<double> pixels;
};

inline void write(const std::string& path, const std::string& text) { std::ofstream(path, std::ios::binary) << text; }

inline std::string content(const std::string& path) {
  std::ifstream file(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(file), {}};
}

inline void write_stack(const std::string& path, const StackShape& shape, bool overwrite = false) {
  const auto writer = create_stack(path, shape, overwrite);
  for (std::size_t i = 0; i < shape.images; ++i)
    writer->append(Picture(shape.rows, shape.columns, static_cast<double>(i)).view());
  writer->finish();
}

inline StackShape shape_of(std::size_t images, std::ptrdiff_t rows, std::ptrdiff_t columns,
                           PixelType type = PixelType::float32) {
  StackShape shape;
  shape.images = images;
  shape.rows = rows;
  shape.columns = columns;
  shape.type = type;
  return shape;
}

// The sentence of the Error that `work` throws, which must have that code.
inline std::string error_of(ErrorCode code, const std::function<void()>& work) {
  try {
    work();
  } catch (const Error& error) {
    EXPECT_EQ(error.code(), code) << error.what();
    return error.what();
  }
  ADD_FAILURE() << "no error";
  return "";
}

#define EXPECT_CONTAINS(text, part) EXPECT_NE((text).find(part), std::string::npos) << (text)

}  // namespace tambour
