// Writers of stacks, and outputs that appear only when whole.
#include <gtest/gtest.h>

#include <cmath>
#include <filesystem>
#include <limits>
#include <vector>

#include "support/file_size_limit.hpp"
#include "support/scratch_folder.hpp"
#include "support/small_stacks.hpp"
#include "tambour/files.hpp"

namespace tambour {
namespace {

namespace fs = std::filesystem;

TEST(StackWriter, EveryFormatComesBackAsItWas) {
  const ScratchFolder folder;
  for (const char* name : {"a.mrc", "a.mrcs", "a.npy", "a.tif", "a.tiff", "a.h5", "a.HDF5"})
    for (const auto type : {PixelType::float32, PixelType::float64})
      for (const PixelSize& pixel :
           {PixelSize{1.35, "angstrom"}, PixelSize{0.11, "micrometre"}, PixelSize{3, "mrad"}, PixelSize{}}) {
        const std::string path = folder / name, extension = fs::path(name).extension();
        const bool mrc = extension == ".mrc" || extension == ".mrcs";
        if (mrc && type == PixelType::float64) continue;
        StackShape shape = shape_of(3, 9, 14, type);
        shape.pixel_size = pixel;
        write_stack(path, shape, true);
        const auto source = open_images({path});
        ASSERT_EQ(source->images(), 3U) << name;
        ASSERT_EQ(source->rows(), 9) << name;
        ASSERT_EQ(source->columns(), 14) << name;
        EXPECT_EQ(source->name(2), path + "#2");
        for (std::size_t i = 0; i < 3; ++i) {
          Picture read(9, 14);
          ASSERT_TRUE(source->read(i, read.view()).ok());
          EXPECT_EQ(read.pixels, Picture(9, 14, static_cast<double>(i)).pixels) << name;
        }
        const PixelSize got = source->pixel_size();
        if (extension == ".npy" || (mrc && pixel.unit == "mrad") || !pixel.known()) {
          EXPECT_FALSE(got.known()) << name;
        } else if (mrc) {
          EXPECT_EQ(got.unit, "angstrom");
          EXPECT_NEAR(got.value, pixel.unit == "angstrom" ? 1.35 : 1100, 1e-6 * got.value);
        } else {
          EXPECT_EQ(got.value, pixel.value) << name;
          EXPECT_EQ(got.unit, pixel.unit) << name;
        }
      }
}

TEST(StackWriter, NotFinitePixelsPassThrough) {
  const ScratchFolder folder;
  for (const char* name : {"a.mrc", "a.npy", "a.tif", "a.h5"}) {
    Picture picture(8, 8);
    picture.pixels[3] = std::numeric_limits<double>::quiet_NaN();
    picture.pixels[4] = -std::numeric_limits<double>::infinity();
    const auto writer = create_stack(folder / name, shape_of(1, 8, 8), false);
    writer->append(picture.view());
    writer->finish();
    Picture read(8, 8);
    ASSERT_TRUE(open_images({folder / name})->read(0, read.view()).ok());
    EXPECT_TRUE(std::isnan(read.pixels[3])) << name;
    EXPECT_EQ(read.pixels[4], picture.pixels[4]) << name;
  }
}

TEST(StackWriter, MisuseIsRefused) {
  const ScratchFolder folder;
  const auto invalid = ErrorCode::invalid_argument;
  EXPECT_CONTAINS(error_of(invalid, [&] { create_stack(folder / "a.png", shape_of(1, 8, 8), false); }), ".mrc");
  EXPECT_CONTAINS(
      error_of(invalid, [&] { create_stack(folder / "a.mrc", shape_of(1, 8, 8, PixelType::float64), false); }),
      "32-bit");
  EXPECT_CONTAINS(error_of(invalid, [&] { create_stack(folder / "a.npy", shape_of(0, 8, 8), false); }), "images");
  const auto writer = create_stack(folder / "a.npy", shape_of(1, 8, 8), false);
  EXPECT_CONTAINS(error_of(invalid, [&] { writer->append(Picture(8, 9).view()); }), "8 x 9");
  EXPECT_CONTAINS(error_of(invalid, [&] { writer->finish(); }), "0 images");
  writer->append(Picture(8, 8).view());
  EXPECT_CONTAINS(error_of(invalid, [&] { writer->append(Picture(8, 8).view()); }), "1 announced");
}

TEST(StackWriter, LeavesNothingUnlessFinished) {
  const ScratchFolder folder;
  for (const char* name : {"a.mrc", "a.npy", "a.tif", "a.h5"}) {
    { create_stack(folder / name, shape_of(2, 8, 8), false)->append(Picture(8, 8).view()); }
    EXPECT_TRUE(folder.names().empty()) << name;
  }
}

TEST(StackWriter, AnUnfinishedReplacementLeavesTheOldFile) {
  const ScratchFolder folder;
  for (const char* name : {"a.mrc", "a.npy", "a.tif", "a.h5"}) {
    write_stack(folder / name, shape_of(2, 8, 8));
    const std::string before = content(folder / name);
    { create_stack(folder / name, shape_of(1, 5, 5), true)->append(Picture(5, 5).view()); }
    EXPECT_EQ(content(folder / name), before) << name;
    EXPECT_CONTAINS(error_of(ErrorCode::cannot_write, [&] { create_stack(folder / name, shape_of(1, 5, 5), false); }),
                    "exists");
    write_stack(folder / name, shape_of(1, 5, 5), true);
    EXPECT_EQ(open_images({folder / name})->rows(), 5) << name;
  }
  EXPECT_EQ(folder.names().size(), 4U);
}

TEST(StackWriter, AFullDiskIsAnErrorAndLeavesNothing) {
  const ScratchFolder folder;
  for (const char* name : {"a.mrc", "a.npy", "a.tif", "a.h5"})
    for (const rlim_t limit : {100, 20000, 65000}) {
      const FileSizeLimit full(limit);
      EXPECT_CONTAINS(error_of(ErrorCode::cannot_write, [&] { write_stack(folder / name, shape_of(10, 64, 64)); }),
                      name);
      EXPECT_TRUE(folder.names().empty()) << name;
    }
  for (const char* name : {"a.mrc", "a.npy", "a.tif", "a.h5"}) write_stack(folder / name, shape_of(10, 64, 64));
}

TEST(StackWriter, LargeTiffFilesAreBigTiff) {
  const ScratchFolder folder;
  for (const std::size_t images : {1000, 40000}) {
    const auto writer = create_stack(folder / "a.tif", shape_of(images, 128, 128, PixelType::float64), false);
    writer->append(Picture(128, 128).view());
    const auto names = folder.names();
    ASSERT_EQ(names.size(), 1U);
    const std::string bytes = content(folder / names[0]);
    const char version = bytes[0] == 'I' ? bytes[2] : bytes[3];
    EXPECT_EQ(version, images == 1000 ? 42 : 43);
  }
}

TEST(StackWriter, ManyPagesAreReached) {
  const ScratchFolder folder;
  constexpr std::size_t pages = 5000;
  write_stack(folder / "a.tif", shape_of(pages, 8, 8));
  const auto source = open_images({folder / "a.tif"});
  ASSERT_EQ(source->images(), pages);
  for (const std::size_t page : {pages - 1, std::size_t{0}, pages / 2}) {
    Picture read(8, 8);
    ASSERT_TRUE(source->read(page, read.view()).ok());
    EXPECT_EQ(read.pixels, Picture(8, 8, static_cast<double>(page)).pixels);
  }
}

TEST(OutputFile, AppearsOnCommitOnly) {
  const ScratchFolder folder;
  {
    OutputFile file(folder / "a.csv", false);
    file.write("lost\n");
  }
  EXPECT_TRUE(folder.names().empty());
  OutputFile file(folder / "a.csv", false);
  file.write("one\n");
  file.write(std::string(200000, 'x'));
  EXPECT_FALSE(fs::exists(folder / "a.csv"));
  EXPECT_TRUE(fs::exists(file.temporary_path()));
  file.commit();
  EXPECT_EQ(content(folder / "a.csv"), "one\n" + std::string(200000, 'x'));
  EXPECT_EQ(folder.names().size(), 1U);
}

TEST(OutputFile, IsRefusedWhereNothingCanBeMade) {
  const ScratchFolder folder;
  const auto refusal = [&](const std::string& path, bool overwrite = false) {
    const std::string checked = error_of(ErrorCode::cannot_write, [&] { check_writable(path, overwrite); });
    EXPECT_EQ(error_of(ErrorCode::cannot_write, [&] { OutputFile(path, overwrite); }), checked);
    return checked;
  };
  EXPECT_CONTAINS(refusal(folder / "no/such/a.csv"), "no folder");
  EXPECT_CONTAINS(refusal(folder / ""), "is a folder");
  EXPECT_CONTAINS(refusal(""), "empty");
  EXPECT_CONTAINS(refusal("/proc/a.csv"), "cannot be made");
  write(folder / "old.csv", "old");
  EXPECT_CONTAINS(refusal(folder / "old.csv"), "exists");
  check_writable(folder / "old.csv", true);
  check_writable(folder / "new.csv", false);
  EXPECT_EQ(folder.names().size(), 1U);
  EXPECT_EQ(content(folder / "old.csv"), "old");
}

TEST(OutputFile, DoesNotReplaceAFileThatCameInTheMeantime) {
  const ScratchFolder folder;
  OutputFile file(folder / "a.csv", false);
  file.write("ours");
  write(folder / "a.csv", "theirs");
  EXPECT_CONTAINS(error_of(ErrorCode::cannot_write, [&] { file.commit(); }), "exists");
  EXPECT_EQ(content(folder / "a.csv"), "theirs");
  EXPECT_EQ(folder.names().size(), 1U);
}

TEST(OutputFile, FullDiskAndDevices) {
  const ScratchFolder folder;
  {
    OutputFile file("/dev/full", false);
    file.write("text");
    EXPECT_CONTAINS(error_of(ErrorCode::cannot_write, [&] { file.commit(); }), "/dev/full");
  }
  {
    OutputFile file("/dev/null", false);
    file.write("text");
    file.commit();
  }
  EXPECT_TRUE(fs::is_character_file("/dev/null"));
  EXPECT_TRUE(fs::is_character_file("/dev/full"));
  const FileSizeLimit full(1000);
  OutputFile file(folder / "a.csv", false);
  EXPECT_CONTAINS(error_of(ErrorCode::cannot_write,
                           [&] {
                             file.write(std::string(100000, 'x'));
                             file.commit();
                           }),
                  "a.csv");
  EXPECT_FALSE(fs::exists(folder / "a.csv"));
}

TEST(OutputFile, KeepsASymbolicLink) {
  const ScratchFolder folder;
  write(folder / "real.csv", "old");
  fs::create_symlink(folder / "real.csv", folder / "link.csv");
  OutputFile file(folder / "link.csv", true);
  file.write("new");
  file.commit();
  EXPECT_TRUE(fs::is_symlink(folder / "link.csv"));
  EXPECT_EQ(content(folder / "real.csv"), "new");
}

}  // namespace
}  // namespace tambour
