// Inputs and lists of them, tables, pictures and hashes.
#include "tambour/files.hpp"

#include <gtest/gtest.h>
#include <sys/resource.h>

#include <algorithm>
#include <cmath>
#include <filesystem>
#include <vector>

#include "support/scratch_folder.hpp"
#include "support/small_stacks.hpp"
#include "tambour/provenance.hpp"

namespace tambour {
namespace {

namespace fs = std::filesystem;

TEST(OpenImages, SeveralInputsAndListsAreOneStack) {
  const ScratchFolder folder;
  fs::create_directories(folder / "sub");
  write_stack(folder / "a.npy", shape_of(2, 8, 10));
  write_stack(folder / "sub/b.tif", shape_of(3, 8, 10));
  write_stack(folder / "sub/c.h5", shape_of(1, 8, 10));
  write(folder / "sub/names.txt", "\xEF\xBB\xBF# comment\r\n\r\n  b.tif \r\nc.h5::/images\n#c.h5\n../a.npy\n");
  const auto source = open_images({folder / "a.npy", "@" + (folder / "sub/names.txt")});
  ASSERT_EQ(source->images(), 2U + 3U + 1U + 2U);
  EXPECT_EQ(source->name(1), (folder / "a.npy") + "#1");
  EXPECT_EQ(source->name(4), (folder / "sub/b.tif") + "#2");
  EXPECT_EQ(source->name(5), folder / "sub/c.h5::/images");
  EXPECT_EQ(source->files().size(), 4U);
  EXPECT_EQ(source->files()[2], folder / "sub/c.h5");
  const double seeds[] = {0, 1, 0, 1, 2, 0, 0, 1};
  for (std::size_t i = 0; i < 8; ++i) {
    Picture read(8, 10);
    ASSERT_TRUE(source->read(i, read.view()).ok());
    EXPECT_EQ(read.pixels, Picture(8, 10, seeds[i]).pixels) << i;
  }
  EXPECT_THROW(source->name(8), Error);
  Picture wrong(10, 8);
  EXPECT_THROW(source->read(0, wrong.view()), Error);
}

TEST(OpenImages, BadInputsStandAsOneImageEach) {
  const ScratchFolder folder;
  write_stack(folder / "a.npy", shape_of(2, 8, 10));
  write_stack(folder / "small.npy", shape_of(2, 6, 10));
  write(folder / "text.png", "no picture");
  write(folder / "short.mrc", content(folder / "a.npy").substr(0, 20));
  const auto source = open_images(
      {folder / "missing.mrc", folder / "text.png", folder / "a.npy", folder / "small.npy", folder / "short.mrc"});
  ASSERT_EQ(source->images(), 7U);
  EXPECT_EQ(source->rows(), 8);
  Picture read(8, 10);
  EXPECT_CONTAINS(source->read(0, read.view()).reason, "no such file");
  EXPECT_CONTAINS(source->read(1, read.view()).reason, "none of PNG");
  EXPECT_TRUE(source->read(2, read.view()).ok());
  EXPECT_TRUE(source->read(3, read.view()).ok());
  EXPECT_CONTAINS(source->read(4, read.view()).reason, "small.npy#0");
  EXPECT_CONTAINS(source->read(4, read.view()).reason, "6 x 10");
  EXPECT_CONTAINS(source->read(6, read.view()).reason, "short.mrc");
  EXPECT_EQ(source->files().size(), 2U);
}

TEST(OpenImages, NothingToReadIsAnError) {
  const ScratchFolder folder;
  const auto refusal = [](const std::vector<std::string>& inputs) {
    return error_of(ErrorCode::bad_input, [&] { open_images(inputs); });
  };
  EXPECT_CONTAINS(refusal({}), "no input");
  EXPECT_CONTAINS(refusal({""}), "empty");
  EXPECT_CONTAINS(refusal({folder / "a.mrc"}), "no such file");
  EXPECT_CONTAINS(refusal({folder / ""}), "folder");
  EXPECT_CONTAINS(refusal({"/dev/null"}), "device");
  EXPECT_CONTAINS(refusal({folder / "a.mrc", folder / "b.mrc"}), "none of the 2 inputs");
  EXPECT_CONTAINS(refusal({"@" + (folder / "names.txt")}), "list");
  write(folder / "names.txt", "# nothing\n\n");
  EXPECT_CONTAINS(refusal({"@" + (folder / "names.txt")}), "names no input");
  write(folder / "names.txt", "@other.txt\n");
  EXPECT_CONTAINS(refusal({"@" + (folder / "names.txt")}), "line 1");
  OpenOptions options;
  options.channel = -1;
  EXPECT_THROW(open_images({folder / "a.mrc"}, options), Error);
}

TEST(OpenImages, TruncatedAfterOpeningIsTheReasonOfTheImage) {
  const ScratchFolder folder;
  for (const char* name : {"a.mrc", "a.npy", "a.tif"}) {
    write_stack(folder / name, shape_of(4, 64, 64));
    const auto source = open_images({folder / name});
    fs::resize_file(folder / name, 20000);
    Picture read(64, 64);
    EXPECT_TRUE(source->read(0, read.view()).ok()) << name;
    EXPECT_CONTAINS(source->read(3, read.view()).reason, name);
  }
}

TEST(OpenImages, PixelSizes) {
  const ScratchFolder folder;
  StackShape shape = shape_of(1, 8, 8);
  shape.pixel_size = {2, "nanometre"};
  write_stack(folder / "a.h5", shape);
  shape.pixel_size = {3, "nanometre"};
  write_stack(folder / "b.h5", shape);
  const auto source = open_images({folder / "a.h5", folder / "b.h5"});
  EXPECT_EQ(source->pixel_size().value, 2);
  ASSERT_FALSE(source->remarks().empty());
  EXPECT_CONTAINS(source->remarks()[0], "differs");
  OpenOptions options;
  options.pixel_size = PixelSize{5, "micrometre"};
  EXPECT_EQ(open_images({folder / "a.h5", folder / "b.h5"}, options)->pixel_size().value, 5);
}

TEST(OpenImages, MoreFilesThanMayBeOpenAtOnce) {
  const ScratchFolder folder;
  std::vector<std::string> inputs;
  const char* const kinds[] = {".npy", ".mrc", ".tif", ".h5"};
  for (int i = 0; i < 400; ++i) {
    inputs.push_back(folder / (std::to_string(i) + kinds[i % 4]));
    write_stack(inputs.back(), shape_of(1, 8, 8));
  }
  rlimit before{};
  ::getrlimit(RLIMIT_NOFILE, &before);
  const rlimit few{200, before.rlim_max};
  ::setrlimit(RLIMIT_NOFILE, &few);
  const auto source = open_images(inputs);
  std::size_t fine = 0;
  for (std::size_t i = 0; i < source->images(); ++i) {
    Picture read(8, 8);
    fine += source->read(i, read.view()).ok() && read.pixels == Picture(8, 8).pixels ? 1 : 0;
  }
  ::setrlimit(RLIMIT_NOFILE, &before);
  EXPECT_EQ(fine, 400U);
}

TEST(Table, ReadsCellsAndNamesWhatIsWrong) {
  const ScratchFolder folder;
  const std::string path = folder / "t.csv";
  write(path, "# made by hand\r\n\r\nimage, x ,source\r\n0, 1.5 ,\"a, \"\"b\"\"\"\r\n# more\r\n1,+nan,\r\n");
  const Table table = read_table(path);
  EXPECT_EQ(table.columns, (std::vector<std::string>{"image", "x", "source"}));
  ASSERT_EQ(table.rows.size(), 2U);
  EXPECT_EQ(table.rows[0][2], "a, \"b\"");
  EXPECT_EQ(table.rows[1][2], "");
  EXPECT_EQ(table.lines, (std::vector<std::size_t>{4, 6}));
  EXPECT_EQ(table.number(0, table.column("x")), 1.5);
  EXPECT_TRUE(std::isnan(table.number(1, 1)));
  const auto bad = ErrorCode::bad_input;
  EXPECT_CONTAINS(error_of(bad, [&] { (void)table.column("y"); }), "image, x, source");
  const std::string sentence = error_of(bad, [&] { (void)table.number(0, 2); });
  EXPECT_CONTAINS(sentence, "line 4");
  EXPECT_CONTAINS(sentence, path);
  const auto refusal = [&](const std::string& text) {
    write(path, text);
    return error_of(bad, [&] { read_table(path); });
  };
  EXPECT_CONTAINS(refusal(""), "no header");
  EXPECT_CONTAINS(refusal("a,b\n1\n"), "line 2 has 1 cells");
  EXPECT_CONTAINS(refusal("a,b\n\"1,2\n"), "does not end");
  EXPECT_CONTAINS(refusal("a,b\n\"1\"x,2\n"), "follows a quoted cell");
  EXPECT_CONTAINS(error_of(bad, [&] { read_table(folder / "none.csv"); }), "no such file");
}

TEST(EncodePng, ComesBackInTheSameColours) {
  const ScratchFolder folder;
  std::vector<std::uint8_t> pixels;
  for (int i = 0; i < 5 * 4 * 3; ++i) pixels.push_back(static_cast<std::uint8_t>(i * 4));
  for (const int channels : {1, 3}) {
    const MatrixView<const std::uint8_t> view(pixels.data(), 5, 4 * channels, 12);
    const auto bytes = encode_png(view, channels);
    write(folder / "a.png", std::string(bytes.begin(), bytes.end()));
    for (int channel = 0; channel < channels; ++channel) {
      OpenOptions options;
      options.channel = channel;
      const auto source = open_images({folder / "a.png"}, options);
      ASSERT_EQ(source->columns(), 4);
      Picture read(5, 4);
      ASSERT_TRUE(source->read(0, read.view()).ok());
      for (std::ptrdiff_t y = 0; y < 5; ++y)
        for (std::ptrdiff_t x = 0; x < 4; ++x) EXPECT_EQ(read.view()(y, x), view(y, x * channels + channel));
    }
  }
  EXPECT_THROW(encode_png({pixels.data(), 5, 4}, 2), Error);
}

TEST(Sha256, KnownMessages) {
  const ScratchFolder folder;
  // Source: FIPS 180-4, examples of NIST.
  write(folder / "abc", "abc");
  EXPECT_EQ(sha256_of_file(folder / "abc"), "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad");
  write(folder / "long", std::string(1'000'000, 'a'));
  EXPECT_EQ(sha256_of_file(folder / "long"), "cdc76e5c9914fb9281a1c7e284d73e67f1809a48a497200e046d39ccc7112cd0");
  write(folder / "empty", "");
  EXPECT_EQ(sha256_of_file(folder / "empty"), "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855");
  EXPECT_THROW(sha256_of_file(folder / "none"), Error);
}

TEST(LibraryVersions, NamesTheLibrariesOfThisRoom) {
  const auto versions = library_versions();
  for (const char* name : {"HDF5", "libtiff", "OpenCV", "OpenSSL", "fmt"}) {
    const auto found = std::find_if(versions.begin(), versions.end(), [&](const auto& v) { return v.first == name; });
    ASSERT_NE(found, versions.end()) << name;
    EXPECT_NE(found->second.find('.'), std::string::npos) << found->second;
  }
}

}  // namespace
}  // namespace tambour
