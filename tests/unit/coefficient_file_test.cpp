// The coefficient file: round trip, what is refused, full disks.
#include "tambour/coefficient_file.hpp"

#include <gtest/gtest.h>

#include <chrono>
#include <filesystem>
#include <fstream>
#include <thread>

#include "support/file_size_limit.hpp"
#include "support/scratch_folder.hpp"
#include "tambour/error.hpp"
#include "tambour/files.hpp"

namespace tambour {
namespace {

CoefficientHeader example_header(bool double_precision) {
  CoefficientHeader header;
  header.geometry = {10.5, Edge::neumann, 0.75};
  header.rows = 30;
  header.columns = 26;
  header.double_precision = double_precision;
  header.tolerance = 1e-6;
  header.pixel_size = {1.25, "angstrom"};
  header.preparation.background = Background::linear;
  header.preparation.scaling = Scaling::outside_sd;
  header.preparation.invert_contrast = true;
  header.noise_frequency = {0.5, 7, 20};
  return header;
}

Provenance example_provenance() {
  return {"tambour-analyse 'a b.mrc' -o c.h5",
          "0.1.0",
          {{"HDF5", "1.10.8"}},
          {{"edge", "neumann"}, {"empty", ""}},
          {{"a b.mrc", std::string(64, 'f')}}};
}

CoefficientRecord example_record(std::size_t image) {
  CoefficientRecord record;
  record.centre = {12.25 + static_cast<double>(image), 14.5};
  record.source = "stäck.mrc#" + std::to_string(image);
  if (image % 3 == 1) record.status.reason = "pixels are not finite";
  record.noise_sd = 0.5 * static_cast<double>(image);
  if (image % 3 != 1) record.noise_spectrum = {1, 2, static_cast<double>(image)};
  for (int i = 0; i < 6; ++i) record.background[i] = i + 0.1 * static_cast<double>(image);
  return record;
}

std::complex<double> example_value(std::size_t image, std::size_t term) {
  return {0.25 * static_cast<double>(image) + 1, static_cast<double>(term) / 8 - 3};
}

// Appends `images` in batches of `batch`.
template <class T>
void write_example(const std::string& path, std::size_t images, std::size_t batch, bool overwrite = false) {
  const CoefficientHeader header = example_header(sizeof(T) == 8);
  const DiskBasis basis(header.geometry);
  CoefficientWriter writer(path, basis, header, overwrite);
  for (std::size_t first = 0; first < images; first += batch) {
    const std::size_t count = std::min(batch, images - first);
    // Rows lie apart, as views may.
    const std::size_t stride = basis.size() + 3;
    std::vector<std::complex<T>> values(count * stride);
    std::vector<CoefficientRecord> records;
    for (std::size_t i = 0; i < count; ++i) {
      records.push_back(example_record(first + i));
      for (std::size_t t = 0; t < basis.size(); ++t)
        values[i * stride + t] = std::complex<T>(example_value(first + i, t));
    }
    writer.append(MatrixView<const std::complex<T>>(values.data(), static_cast<std::ptrdiff_t>(count),
                                                    static_cast<std::ptrdiff_t>(basis.size()),
                                                    static_cast<std::ptrdiff_t>(stride)),
                  records);
  }
  writer.finish(example_provenance());
}

std::string bytes_of(const std::string& path) {
  std::ifstream file(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(file), {}};
}

std::string refusal(const std::string& path) {
  try {
    const CoefficientReader reader(path);
  } catch (const Error& error) {
    EXPECT_EQ(error.code(), ErrorCode::bad_input);
    EXPECT_NE(std::string(error.what()).find(path), std::string::npos) << error.what();
    return error.what();
  }
  return "";
}

template <class T>
void expect_round_trip() {
  const ScratchFolder folder;
  const std::string path = folder / "c.h5";
  constexpr std::size_t images = 11;
  write_example<T>(path, images, 4);
  const CoefficientReader reader(path);
  const CoefficientHeader expected = example_header(sizeof(T) == 8);
  const CoefficientHeader& header = reader.header();
  EXPECT_EQ(header.geometry.radius, 10.5);
  EXPECT_EQ(header.geometry.edge, Edge::neumann);
  EXPECT_EQ(header.geometry.bandlimit, 0.75);
  EXPECT_EQ(header.rows, 30);
  EXPECT_EQ(header.columns, 26);
  EXPECT_EQ(header.double_precision, expected.double_precision);
  EXPECT_EQ(header.tolerance, 1e-6);
  EXPECT_EQ(header.pixel_size.value, 1.25);
  EXPECT_EQ(header.pixel_size.unit, "angstrom");
  EXPECT_EQ(header.solver, expected.solver);
  EXPECT_EQ(header.preparation.background, Background::linear);
  EXPECT_EQ(header.preparation.scaling, Scaling::outside_sd);
  EXPECT_TRUE(header.preparation.invert_contrast);
  EXPECT_EQ(header.noise_frequency, expected.noise_frequency);
  const Provenance provenance = example_provenance();
  EXPECT_EQ(header.provenance.command, provenance.command);
  EXPECT_EQ(header.provenance.version, provenance.version);
  EXPECT_EQ(header.provenance.libraries, provenance.libraries);
  EXPECT_EQ(header.provenance.options, provenance.options);
  EXPECT_EQ(header.provenance.inputs, provenance.inputs);

  ASSERT_EQ(reader.images(), images);
  const auto terms = static_cast<std::ptrdiff_t>(reader.basis().size());
  const std::ptrdiff_t stride = terms + 2;
  std::vector<std::complex<double>> values(static_cast<std::size_t>(7 * stride), {-99, -99});
  std::vector<CoefficientRecord> records;
  reader.read(3, {values.data(), 7, terms, stride}, &records);
  ASSERT_EQ(records.size(), 7U);
  for (std::size_t i = 0; i < 7; ++i) {
    const CoefficientRecord record = example_record(3 + i);
    EXPECT_EQ(records[i].centre.x, record.centre.x);
    EXPECT_EQ(records[i].centre.y, record.centre.y);
    EXPECT_EQ(records[i].source, record.source);
    EXPECT_EQ(records[i].status.reason, record.status.reason);
    EXPECT_EQ(records[i].noise_sd, record.noise_sd);
    EXPECT_TRUE(std::equal(std::begin(record.background), std::end(record.background), records[i].background));
    EXPECT_EQ(records[i].noise_spectrum, record.status.ok() ? record.noise_spectrum : std::vector<double>(3));
    for (std::size_t t = 0; t < static_cast<std::size_t>(stride); ++t)
      EXPECT_EQ(values[i * static_cast<std::size_t>(stride) + t],
                t < static_cast<std::size_t>(terms) ? example_value(3 + i, t) : std::complex<double>(-99, -99));
  }
  EXPECT_THROW(reader.read(8, {values.data(), 7, terms, stride}, nullptr), Error);
  EXPECT_THROW(reader.read(0, {values.data(), 1, terms - 1}, nullptr), Error);
}

TEST(CoefficientFile, SinglePrecisionRoundTrip) { expect_round_trip<float>(); }
TEST(CoefficientFile, DoublePrecisionRoundTrip) { expect_round_trip<double>(); }

TEST(CoefficientFile, SameContentAtAnotherTimeGivesTheSameBytes) {
  const ScratchFolder folder;
  write_example<float>(folder / "a.h5", 9, 9);
  std::this_thread::sleep_for(std::chrono::milliseconds(1100));  // HDF5 would note seconds
  write_example<float>(folder / "b.h5", 9, 9);
  EXPECT_TRUE(bytes_of(folder / "a.h5") == bytes_of(folder / "b.h5"));
}

TEST(CoefficientFile, NoImagesAreAFileToo) {
  const ScratchFolder folder;
  write_example<double>(folder / "c.h5", 0, 1);
  EXPECT_EQ(CoefficientReader(folder / "c.h5").images(), 0U);
}

TEST(CoefficientFile, NothingIsLeftUnlessFinished) {
  const ScratchFolder folder;
  const CoefficientHeader header = example_header(true);
  const DiskBasis basis(header.geometry);
  {
    CoefficientWriter writer(folder / "c.h5", basis, header, false);
    std::vector<std::complex<double>> values(basis.size());
    writer.append(MatrixView<const std::complex<double>>(values.data(), 1, static_cast<std::ptrdiff_t>(basis.size())),
                  {example_record(0)});
  }
  EXPECT_TRUE(folder.names().empty());
  write_example<double>(folder / "c.h5", 1, 1);
  EXPECT_THROW(CoefficientWriter(folder / "c.h5", basis, header, false), Error);
  EXPECT_EQ(folder.names().size(), 1U);
}

TEST(CoefficientFile, AFullDiskIsAnErrorAndLeavesNothing) {
  const ScratchFolder folder;
  // From no room for the first byte to all but the last pieces, which are written on closing.
  write_example<double>(folder / "c.h5", 700, 50);
  const auto whole = std::filesystem::file_size(folder / "c.h5");
  std::filesystem::remove(folder / "c.h5");
  for (const auto limit : {std::uintmax_t{10}, std::uintmax_t{3000}, whole / 3, whole - 3000, whole - 1}) {
    const FileSizeLimit full(limit);
    try {
      write_example<double>(folder / "c.h5", 700, 50);
      ADD_FAILURE() << "no error with room for " << limit << " of " << whole << " bytes";
    } catch (const Error& error) {
      EXPECT_EQ(error.code(), ErrorCode::cannot_write) << error.what();
    }
    EXPECT_TRUE(folder.names().empty());
  }
  write_example<double>(folder / "c.h5", 2, 2);
  EXPECT_EQ(CoefficientReader(folder / "c.h5").images(), 2U);
}

TEST(CoefficientFile, MisuseIsRefused) {
  const ScratchFolder folder;
  const CoefficientHeader header = example_header(true);
  const DiskBasis basis(header.geometry);
  CoefficientWriter writer(folder / "c.h5", basis, header, false);
  std::vector<std::complex<double>> values(2 * basis.size());
  const auto terms = static_cast<std::ptrdiff_t>(basis.size());
  using View = MatrixView<const std::complex<double>>;
  EXPECT_THROW(writer.append(View(values.data(), 1, terms - 1), {example_record(0)}), Error);
  EXPECT_THROW(writer.append(View(values.data(), 2, terms), {example_record(0)}), Error);
  CoefficientRecord record = example_record(0);
  record.noise_spectrum.push_back(1);
  EXPECT_THROW(writer.append(View(values.data(), 1, terms), {record}), Error);
  writer.finish(example_provenance());
  EXPECT_THROW(writer.append(View(values.data(), 1, terms), {example_record(0)}), Error);
  EXPECT_THROW(writer.finish(example_provenance()), Error);
}

TEST(CoefficientFile, WhatIsNoCoefficientFileIsRefused) {
  const ScratchFolder folder;
  EXPECT_NE(refusal(folder / "none.h5").find("no such file"), std::string::npos);
  std::ofstream(folder / "text.h5") << "text";
  EXPECT_NE(refusal(folder / "text.h5").find("not an HDF5 file"), std::string::npos);
  StackShape shape;
  shape.images = shape.rows = shape.columns = 1;
  const auto stack = create_stack(folder / "images.h5", shape, false);
  const double pixel = 1;
  stack->append({&pixel, 1, 1});
  stack->finish();
  EXPECT_NE(refusal(folder / "images.h5").find("not a coefficient file"), std::string::npos);
  write_example<double>(folder / "c.h5", 40, 40);
  const auto size = std::filesystem::file_size(folder / "c.h5");
  std::filesystem::resize_file(folder / "c.h5", size / 2);
  EXPECT_NE(refusal(folder / "c.h5").find("c.h5"), std::string::npos);
}

// Replaces the only place where those bytes stand in a file.
template <class T>
void patch(const std::string& path, T from, T to) {
  std::string bytes = bytes_of(path);
  const std::string old(reinterpret_cast<const char*>(&from), sizeof(T));
  const auto place = bytes.find(old);
  ASSERT_NE(place, std::string::npos);
  ASSERT_EQ(bytes.find(old, place + 1), std::string::npos);
  bytes.replace(place, sizeof(T), reinterpret_cast<const char*>(&to), sizeof(T));
  std::ofstream(path, std::ios::binary) << bytes;
}

TEST(CoefficientFile, TermsThatAreNotThoseOfTheGeometryAreRefused) {
  const ScratchFolder folder;
  const std::string path = folder / "c.h5";
  write_example<double>(path, 2, 2);
  const double root = DiskBasis(example_header(true).geometry).terms()[20].root;
  patch(path, root, root * (1 + 5e-13));
  EXPECT_EQ(refusal(path), "");
  write_example<double>(path, 2, 2, true);
  patch(path, root, root * (1 + 5e-12));
  EXPECT_NE(refusal(path).find("term 20"), std::string::npos) << refusal(path);
  write_example<double>(path, 2, 2, true);
  patch(path, 10.5, 11.5);  // the radius
  EXPECT_NE(refusal(path).find("shape"), std::string::npos) << refusal(path);
  write_example<double>(path, 2, 2, true);
  patch(path, 10.5, -1.0);
  EXPECT_NE(refusal(path).find("radius"), std::string::npos) << refusal(path);
}

TEST(CoefficientFile, ANewerSchemaIsRefused) {
  const ScratchFolder folder;
  const std::string path = folder / "c.h5";
  write_example<double>(path, 1, 1);
  std::string bytes = bytes_of(path);
  // The attribute's name is followed by 16 bytes of type, 8 of shape, and the number.
  const auto number = bytes.find("schema_version") + 16 + 16 + 8;
  ASSERT_EQ(bytes.substr(number, 8), std::string("\1\0\0\0\0\0\0\0", 8));
  bytes[number] = 2;
  std::ofstream(path, std::ios::binary) << bytes;
  EXPECT_NE(refusal(path).find("schema_version is 2; this program reads 1 to 1"), std::string::npos) << refusal(path);
}

TEST(CoefficientFile, ReadersInManyThreads) {
  const ScratchFolder folder;
  write_example<float>(folder / "c.h5", 40, 7);
  const CoefficientReader reader(folder / "c.h5");
  std::vector<std::thread> threads;
  for (int i = 0; i < 6; ++i)
    threads.emplace_back([&] {
      const auto terms = static_cast<std::ptrdiff_t>(reader.basis().size());
      std::vector<std::complex<double>> values(static_cast<std::size_t>(terms));
      for (std::size_t image = 0; image < reader.images(); ++image) {
        reader.read(image, {values.data(), 1, terms}, nullptr);
        EXPECT_EQ(values[5], example_value(image, 5));
        const CoefficientReader another(folder / "c.h5");
        EXPECT_EQ(another.images(), reader.images());
      }
    });
  for (auto& thread : threads) thread.join();
}

}  // namespace
}  // namespace tambour
