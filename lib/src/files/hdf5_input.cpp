// Datasets of HDF5 files as stacks.
#include <algorithm>

#include "files/frame_checks.hpp"
#include "files/hdf5_handle.hpp"
#include "files/image_file.hpp"
#include "files/refuse.hpp"
#include "files/units.hpp"

namespace tambour {
namespace {

bool is_number(hid_t dataset) {
  const Hdf5Handle type(H5Dget_type(dataset), H5Tclose, "examine a dataset");
  const auto kind = H5Tget_class(type.get());
  return kind == H5T_INTEGER || kind == H5T_FLOAT;
}

bool may_be_images(hid_t dataset) {
  const auto dimensions = dimensions_of(dataset);
  if (dimensions.size() != 2 && dimensions.size() != 3) return false;
  constexpr hsize_t smallest_side = 2;
  return dimensions.back() >= smallest_side && dimensions[dimensions.size() - 2] >= smallest_side && is_number(dataset);
}

struct Listing {
  std::vector<std::string> image_like;
  std::vector<std::string> all;  // with shapes
};

herr_t list_object(hid_t root, const char* name, const H5O_info_t* info, void* data) {
  if (info->type != H5O_TYPE_DATASET) return 0;
  auto& listing = *static_cast<Listing*>(data);
  try {
    const auto dataset = open_dataset(root, name);
    const std::string path = std::string("/") + name;
    listing.all.push_back(fmt::format("{} ({})", path, fmt::join(dimensions_of(dataset.get()), " x ")));
    if (may_be_images(dataset.get())) listing.image_like.push_back(path);
  } catch (const Hdf5Failure&) {
    H5Eclear2(H5E_DEFAULT);  // a dataset that cannot be opened is none that could be meant
  }
  return 0;
}

Listing list_datasets(hid_t file) {
  Listing listing;
  checked(H5Ovisit2(file, H5_INDEX_NAME, H5_ITER_INC, list_object, &listing, H5O_INFO_BASIC), "list the datasets");
  return listing;
}

std::string told(const Listing& listing) {
  constexpr std::size_t most = 20;
  if (listing.all.empty()) return "there is no dataset";
  const auto end = listing.all.begin() + static_cast<std::ptrdiff_t>(std::min(most, listing.all.size()));
  return fmt::format("there {} {}{}", listing.all.size() == 1 ? "is" : "are", fmt::join(listing.all.begin(), end, ", "),
                     listing.all.size() > most ? fmt::format(" and {} more", listing.all.size() - most) : "");
}

class Hdf5File final : public ImageFile {
 public:
  Hdf5File(SharedReadFile file, std::string dataset, const OpenOptions& options)
      : file_(std::move(file)), path_(std::move(dataset)) {
    const Hdf5Lock lock;
    try {
      const Hdf5Handle handle = open_hdf5_file(file_->path());
      find_dataset(handle.get());
      cache_bytes_ = 0;
      const Hdf5Handle examined = open_dataset(handle.get(), path_);
      examine(handle.get(), examined.get());
      if (file_->kept()) kept_ = open_for_reading(handle.get());
    } catch (const Hdf5Failure& failure) {
      refuse_input("{}: {}", file_->path(), failure.what());
    }
    std::string remark;
    choose_samples(file_->path(), 1, PixelKind::grey, options.channel, remark);
  }

  std::size_t pages() const noexcept override { return pages_; }
  FrameShape shape(std::size_t) const override { return shape_; }
  PixelSize pixel_size() const override { return pixel_size_; }
  std::vector<std::string> remarks() const override { return remarks_; }

  FrameShape read(std::size_t page, ImageView<double> out) const override {
    if (shape_ != shape_of(out)) return shape_;
    const auto rows = static_cast<hsize_t>(shape_.rows), columns = static_cast<hsize_t>(shape_.columns);
    const bool direct = out.row_stride == out.columns;
    std::vector<double> pixels(direct ? 0 : static_cast<std::size_t>(shape_.rows * shape_.columns));
    const Hdf5Lock lock;
    try {
      const Hdf5Handle opened = kept_.get() >= 0 ? Hdf5Handle() : open_for_reading(open_hdf5_file(file_->path()).get());
      const hid_t dataset = kept_.get() >= 0 ? kept_.get() : opened.get();
      const auto selection = three_dimensional_ ? selected_space(dataset, {page, 0, 0}, {1, rows, columns})
                                                : selected_space(dataset, {0, 0}, {rows, columns});
      const auto memory = simple_space({rows, columns});
      checked(H5Dread(dataset, H5T_NATIVE_DOUBLE, memory.get(), selection.get(), H5P_DEFAULT,
                      direct ? out.data : pixels.data()),
              "read an image");
    } catch (const Hdf5Failure& failure) {
      refuse_input("{}: image {} of {}: {}", file_->path(), page, path_, failure.what());
    }
    if (!direct)
      for (std::ptrdiff_t y = 0; y < out.rows; ++y)
        std::copy_n(pixels.data() + y * out.columns, out.columns, out.row(y));
    return shape_;
  }

 private:
  void find_dataset(hid_t file) {
    if (path_.empty()) {
      const Listing listing = list_datasets(file);
      if (listing.image_like.size() != 1)
        refuse_input("{}: an HDF5 file needs the name of a dataset, as in {}::/images; {}", file_->path(),
                     file_->path(), told(listing));
      path_ = listing.image_like[0];
      remarks_.push_back(fmt::format("dataset {} is read, the only one that can be images", path_));
    }
    H5O_info_t info;
    const bool found = H5Oget_info_by_name2(file, path_.c_str(), &info, H5O_INFO_BASIC, H5P_DEFAULT) >= 0;
    if (found && info.type == H5O_TYPE_DATASET) return;
    H5Eclear2(H5E_DEFAULT);
    refuse_input("{}: {} {}; {}", file_->path(), path_, found ? "is not a dataset" : "does not exist",
                 told(list_datasets(file)));
  }

  void examine(hid_t file, hid_t dataset) {
    const auto dimensions = dimensions_of(dataset);
    if (dimensions.size() != 2 && dimensions.size() != 3)
      refuse_input("{}: {} has {} dimensions; allowed are 2 (rows, columns) and 3 (images, rows, columns)",
                   file_->path(), path_, dimensions.size());
    if (!is_number(dataset))
      refuse_input("{}: {} holds neither integers nor floating-point numbers", file_->path(), path_);
    three_dimensional_ = dimensions.size() == 3;
    const hsize_t images = three_dimensional_ ? dimensions[0] : 1;
    const hsize_t rows = dimensions[dimensions.size() - 2], columns = dimensions.back();
    if (images == 0 || rows == 0 || columns == 0)
      refuse_input("{}: {} is empty ({})", file_->path(), path_, fmt::join(dimensions, " x "));
    check_storage(dataset, product({images, rows, columns}));
    pages_ = static_cast<std::size_t>(images);
    shape_ = {static_cast<std::ptrdiff_t>(rows), static_cast<std::ptrdiff_t>(columns)};
    find_pixel_size(file, dataset);
  }

  // What the dataset tells must be backed by bytes of the file, save where it lies in other files.
  void check_storage(hid_t dataset, std::optional<std::uint64_t> elements) {
    const Hdf5Handle creation(H5Dget_create_plist(dataset), H5Pclose, "examine a dataset");
    const Hdf5Handle type(H5Dget_type(dataset), H5Tclose, "examine a dataset");
    const std::uint64_t element_bytes = H5Tget_size(type.get());
    const auto layout = H5Pget_layout(creation.get());
    if (layout == H5D_VIRTUAL || H5Pget_external_count(creation.get()) > 0) return;
    const std::uint64_t stored = H5Dget_storage_size(dataset);
    const auto bytes = elements ? product({*elements, element_bytes}) : std::nullopt;
    if (stored == 0) refuse_input("{}: {} was described but never filled", file_->path(), path_);
    if (stored > file_->size())
      refuse_input("{}: {} tells {} bytes, but the file has only {} bytes", file_->path(), path_, stored,
                   file_->size());
    check_expansion(file_->path(), bytes, stored, any_expansion);
    if (layout == H5D_CHUNKED) set_cache(dataset, creation.get(), element_bytes);
  }

  // HDF5 unpacks whole chunks, each of which may hold many images; room for those of one image, so that reading image
  // after image unpacks each chunk once.
  void set_cache(hid_t dataset, hid_t creation, std::uint64_t element_bytes) {
    const auto dimensions = dimensions_of(dataset);
    std::vector<hsize_t> chunk(dimensions.size());
    checked(H5Pget_chunk(creation, static_cast<int>(chunk.size()), chunk.data()), "examine a dataset");
    std::uint64_t chunk_bytes = element_bytes, across = 1;
    for (std::size_t i = 0; i < chunk.size(); ++i) {
      chunk_bytes = product({chunk_bytes, chunk[i]}).value_or(~std::uint64_t{0} >> 1);
      if (i + 2 >= chunk.size()) across *= (dimensions[i] + chunk[i] - 1) / chunk[i];
    }
    check_expansion(file_->path(), chunk_bytes, file_->size(), any_expansion);
    constexpr std::uint64_t usual = 1 << 20, most = 1 << 29;
    cache_bytes_ = static_cast<std::size_t>(std::clamp(product({chunk_bytes, across}).value_or(most), usual, most));
  }

  Hdf5Handle open_for_reading(hid_t file) const {
    const Hdf5Handle access(H5Pcreate(H5P_DATASET_ACCESS), H5Pclose, "set up access");
    if (cache_bytes_ > 0)
      checked(H5Pset_chunk_cache(access.get(), H5D_CHUNK_CACHE_NSLOTS_DEFAULT, cache_bytes_, 1.0), "set up access");
    return {H5Dopen2(file, path_.c_str(), access.get()), H5Dclose, "open a dataset"};
  }

  void find_pixel_size(hid_t file, hid_t dataset) {
    const Hdf5Handle root(H5Gopen2(file, "/", H5P_DEFAULT), H5Gclose, "open the root");
    for (const hid_t place : {dataset, root.get()}) {
      const auto value = read_number_attribute(place, "pixel_size");
      if (!value || !(*value > 0)) continue;
      pixel_size_ = {*value, unit_name(read_text_attribute(place, "unit").value_or(""))};
      return;
    }
  }

  SharedReadFile file_;
  std::string path_;
  std::size_t pages_ = 0;
  bool three_dimensional_ = false;
  FrameShape shape_;
  std::size_t cache_bytes_ = 0;
  PixelSize pixel_size_;
  std::vector<std::string> remarks_;
  Hdf5Handle kept_;
};

}  // namespace

std::unique_ptr<ImageFile> open_hdf5(SharedReadFile file, const std::string& dataset, const OpenOptions& options) {
  return std::make_unique<Hdf5File>(std::move(file), dataset, options);
}

}  // namespace tambour
