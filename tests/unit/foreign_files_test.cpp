// Reads what other libraries wrote: every format, type and byte order. The files and what they hold are made by
// tests/support/make_foreign_files.py with NumPy, mrcfile, tifffile, h5py and Pillow.
#include <gtest/gtest.h>

#include <cmath>
#include <cstdlib>
#include <filesystem>
#include <thread>
#include <vector>

#include "tambour/error.hpp"
#include "tambour/files.hpp"

namespace tambour {
namespace {

const std::string folder = TAMBOUR_FOREIGN_FILES;

// The pattern of make_foreign_files.py.
double pattern(std::size_t image, std::ptrdiff_t y, std::ptrdiff_t x) {
  return 7 * static_cast<double>(image) + 3 * static_cast<double>(y) + static_cast<double>(x);
}

struct Expected {
  double scale, offset, tolerance;
};

// Largest difference of an image from its pattern.
double deviation(const FileSource& source, std::size_t image, const Expected& expected) {
  std::vector<double> pixels(static_cast<std::size_t>(source.rows() * source.columns()), -1e300);
  const ImageView<double> view(pixels.data(), source.rows(), source.columns());
  const ImageStatus status = source.read(image, view);
  EXPECT_TRUE(status.ok()) << status.reason;
  double worst = 0;
  for (std::ptrdiff_t y = 0; y < view.rows; ++y)
    for (std::ptrdiff_t x = 0; x < view.columns; ++x)
      if (const double off = std::abs(view(y, x) - (expected.scale * pattern(image, y, x) + expected.offset));
          !(off <= worst))
        worst = std::isnan(off) ? HUGE_VAL : off;
  return worst;
}

std::string joined(const std::vector<std::string>& texts) {
  std::string all;
  for (const auto& text : texts) all += text + "\n";
  return all;
}

std::string refusal(const std::string& input, const OpenOptions& options = {}) {
  try {
    open_images({input}, options);
  } catch (const Error& error) {
    EXPECT_EQ(error.code(), ErrorCode::bad_input);
    return error.what();
  }
  return "";
}

std::string reason(const std::string& name, std::size_t image = 0) {
  const auto source = open_images({folder + "/" + name});
  std::vector<double> pixels(static_cast<std::size_t>(source->rows() * source->columns()));
  return source->read(image, ImageView<double>(pixels.data(), source->rows(), source->columns())).reason;
}

TEST(ForeignFiles, EveryFileHoldsWhatItsWriterPutIn) {
  const Table manifest = read_table(folder + "/manifest.csv");
  ASSERT_GT(manifest.rows.size(), 300U);
  const auto text = [&](std::size_t row, const char* column) { return manifest.rows[row][manifest.column(column)]; };
  const auto number = [&](std::size_t row, const char* column) {
    return manifest.number(row, manifest.column(column));
  };
  for (std::size_t row = 0; row < manifest.rows.size(); ++row) {
    const std::string name = text(row, "file");
    SCOPED_TRACE(name + " channel " + text(row, "channel"));
    OpenOptions options;
    if (!text(row, "channel").empty()) options.channel = static_cast<int>(number(row, "channel"));
    std::unique_ptr<FileSource> source;
    ASSERT_NO_THROW(source = open_images({folder + "/" + name}, options)) << refusal(folder + "/" + name, options);
    ASSERT_EQ(source->images(), static_cast<std::size_t>(number(row, "images")));
    ASSERT_EQ(source->rows(), static_cast<std::ptrdiff_t>(number(row, "rows")));
    ASSERT_EQ(source->columns(), static_cast<std::ptrdiff_t>(number(row, "columns")));
    const Expected expected{number(row, "scale"), number(row, "offset"), number(row, "tolerance")};
    for (std::size_t image = 0; image < source->images(); ++image)
      EXPECT_LE(deviation(*source, image, expected), expected.tolerance) << "image " << image;
    EXPECT_DOUBLE_EQ(source->pixel_size().value, number(row, "pixel_size"));
    EXPECT_EQ(source->pixel_size().unit, text(row, "unit"));
    const std::string remark = text(row, "remark"), remarks = joined(source->remarks());
    if (remark.empty() && options.channel == std::nullopt)
      EXPECT_EQ(remarks, "");
    else
      EXPECT_NE(remarks.find(remark), std::string::npos) << remarks;
  }
}

TEST(ForeignFiles, LyingAndForeignFilesAreRefusedInOneSentence) {
  const Table refused = read_table(folder + "/refused.csv");
  ASSERT_GT(refused.rows.size(), 30U);
  for (std::size_t row = 0; row < refused.rows.size(); ++row) {
    const std::string name = refused.rows[row][refused.column("file")];
    const std::string sentence = refusal(folder + "/" + name);
    EXPECT_NE(sentence.find(refused.rows[row][refused.column("words")]), std::string::npos)
        << name << ": \"" << sentence << "\"";
    EXPECT_NE(sentence.find(name.substr(0, name.find("::"))), std::string::npos) << sentence;
    EXPECT_EQ(sentence.find('\n'), std::string::npos) << sentence;
  }
}

TEST(ForeignFiles, DamageThatShowsOnlyInThePixelsIsTheReasonOfThatImage) {
  EXPECT_NE(reason("damaged.png").find("checksum"), std::string::npos) << reason("damaged.png");
  EXPECT_NE(reason("cut.jpg").find("truncated"), std::string::npos) << reason("cut.jpg");
  EXPECT_EQ(reason("looped.tif", 0), "");
  EXPECT_NE(reason("looped.tif", 1).find("damaged"), std::string::npos) << reason("looped.tif", 1);
}

TEST(ForeignFiles, ThreadsReadTheSameAsOne) {
  for (const char* name : {"f4_le_zip.tif", "mode2_be.mrcs", "v1_le_f4_f.npy", "f4_be.h5", "rgb_planar.tif"}) {
    const auto source = open_images({folder + "/" + std::string(name)});
    const auto pixels = static_cast<std::size_t>(source->rows() * source->columns());
    const auto read = [&](std::size_t image) {
      std::vector<double> out(pixels);
      EXPECT_TRUE(source->read(image, ImageView<double>(out.data(), source->rows(), source->columns())).ok());
      return out;
    };
    std::vector<std::vector<double>> alone;
    for (std::size_t image = 0; image < source->images(); ++image) alone.push_back(read(image));
    std::vector<std::thread> threads;
    for (int i = 0; i < 8; ++i)
      threads.emplace_back([&] {
        for (int round = 0; round < 20; ++round)
          for (std::size_t image = 0; image < source->images(); ++image) EXPECT_EQ(read(image), alone[image]) << name;
      });
    for (auto& thread : threads) thread.join();
  }
}

TEST(ForeignFiles, RowsOfTheTargetMayLieApart) {
  for (const char* name : {"grey8.png", "f4_le_tiles.tif", "mode2_le.mrcs", "v1_be_f4_f.npy", "f4_le.h5"}) {
    const auto source = open_images({folder + "/" + std::string(name)});
    const auto rows = source->rows(), columns = source->columns(), stride = columns + 5;
    std::vector<double> apart(static_cast<std::size_t>(rows * stride), -7),
        together(static_cast<std::size_t>(rows * columns));
    ASSERT_TRUE(source->read(0, ImageView<double>(apart.data(), rows, columns, stride)).ok());
    ASSERT_TRUE(source->read(0, ImageView<double>(together.data(), rows, columns)).ok());
    for (std::ptrdiff_t y = 0; y < rows; ++y)
      for (std::ptrdiff_t x = 0; x < stride; ++x)
        EXPECT_EQ(apart[static_cast<std::size_t>(y * stride + x)],
                  x < columns ? together[static_cast<std::size_t>(y * columns + x)] : -7)
            << name;
  }
}

}  // namespace
}  // namespace tambour
