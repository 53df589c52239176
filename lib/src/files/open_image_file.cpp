// Which format a file has.
#include <string_view>

#include "files/image_file.hpp"
#include "files/mrc_layout.hpp"
#include "files/refuse.hpp"

namespace tambour {
namespace {

using namespace std::string_view_literals;

enum class Format { png, jpeg, tiff, npy, hdf5, mrc, gzip, unknown };

struct Signature {
  std::string_view bytes;
  Format format;
};

constexpr Signature signatures[] = {
    {"\x89PNG\r\n\x1A\n"sv, Format::png}, {"\xFF\xD8\xFF"sv, Format::jpeg},      {"II\x2A\0"sv, Format::tiff},
    {"MM\0\x2A"sv, Format::tiff},         {"II\x2B\0"sv, Format::tiff},          {"MM\0\x2B"sv, Format::tiff},
    {"\x93NUMPY"sv, Format::npy},         {"\x89HDF\r\n\x1A\n"sv, Format::hdf5}, {"\x1F\x8B"sv, Format::gzip}};

bool ends_in(std::string_view name, std::initializer_list<std::string_view> endings) {
  for (const auto ending : endings)
    if (name.ends_with(ending)) return true;
  return false;
}

Format format_of(const ReadFile& file) {
  const auto head = file.head(mrc::header_bytes);
  const std::string_view bytes(reinterpret_cast<const char*>(head.data()), head.size());
  for (const auto& signature : signatures)
    if (bytes.starts_with(signature.bytes)) return signature.format;
  if (bytes.size() > mrc::map_word && bytes.substr(mrc::map_word).starts_with("MAP")) return Format::mrc;
  // Two formats are not told by the first bytes alone: MRC before 2000, and HDF5 behind a block of the user's.
  if (ends_in(file.path(), {".mrc", ".mrcs", ".map", ".MRC", ".MRCS"})) return Format::mrc;
  if (ends_in(file.path(), {".h5", ".hdf5", ".hdf"})) return Format::hdf5;
  return Format::unknown;
}

}  // namespace

std::unique_ptr<ImageFile> open_image_file(const std::string& input, const OpenOptions& options) {
  const auto [path, dataset] = split_input(input);
  auto file = std::make_shared<const ReadFile>(path);
  if (file->size() == 0) refuse_input("{}: is empty", path);
  const Format format = format_of(*file);
  if (format != Format::hdf5 && path != input)
    refuse_input("{}: \"::\" names a dataset, but {} is not an HDF5 file", input, path);
  switch (format) {
    case Format::png:
      return open_png(std::move(file), options);
    case Format::jpeg:
      return open_jpeg(std::move(file), options);
    case Format::tiff:
      return open_tiff(std::move(file), options);
    case Format::npy:
      return open_npy(std::move(file), options);
    case Format::hdf5:
      return open_hdf5(std::move(file), dataset, options);
    case Format::mrc:
      return open_mrc(std::move(file), options);
    case Format::gzip:
      refuse_input("{}: is compressed by gzip; unpack it first", path);
    case Format::unknown:
      break;
  }
  refuse_input("{}: is none of PNG, JPEG, TIFF, MRC, .npy and HDF5", path);
}

}  // namespace tambour
