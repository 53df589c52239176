#include "files/tiff_handle.hpp"

#include <algorithm>
#include <cstdarg>
#include <cstdio>
#include <utility>

#include "files/refuse.hpp"

namespace tambour {

// What libtiff's callbacks work on. Exceptions must not pass through C, so trouble is kept as text.
struct TiffHandle::Client {
  std::string path;
  std::shared_ptr<const ReadFile> input;
  std::shared_ptr<const ReadFile::Descriptor> descriptor;
  AtomicFile* output = nullptr;
  std::uint64_t position = 0;
  std::string error;

  std::uint64_t size() const { return input ? input->size() : output->size(); }
  void complain(const std::string& text) {
    if (error.empty()) error = text;
  }
};

namespace {

TiffHandle::Client& client_of(thandle_t handle) { return *static_cast<TiffHandle::Client*>(handle); }

tmsize_t read_bytes(thandle_t handle, void* to, tmsize_t count) {
  auto& client = client_of(handle);
  const std::uint64_t size = client.size();
  const std::uint64_t left = client.position < size ? size - client.position : 0;
  const auto wanted = static_cast<std::size_t>(std::min<std::uint64_t>(left, static_cast<std::uint64_t>(count)));
  try {
    const std::span out(static_cast<std::byte*>(to), wanted);
    if (client.input)
      client.input->read(*client.descriptor, client.position, out);
    else
      client.output->read(client.position, out);
  } catch (const std::exception& error) {
    client.complain(error.what());
    return -1;
  }
  client.position += wanted;
  return static_cast<tmsize_t>(wanted);
}

tmsize_t write_bytes(thandle_t handle, void* from, tmsize_t count) {
  auto& client = client_of(handle);
  if (client.output == nullptr) return -1;
  try {
    client.output->write(client.position, {static_cast<const std::byte*>(from), static_cast<std::size_t>(count)});
  } catch (const std::exception& error) {
    client.complain(error.what());
    return -1;
  }
  client.position += static_cast<std::uint64_t>(count);
  return count;
}

toff_t seek(thandle_t handle, toff_t offset, int whence) {
  auto& client = client_of(handle);
  const std::uint64_t base = whence == SEEK_SET ? 0 : whence == SEEK_CUR ? client.position : client.size();
  return client.position = base + offset;
}

int close_nothing(thandle_t) { return 0; }
toff_t size_of(thandle_t handle) { return client_of(handle).size(); }
int map_nothing(thandle_t, void**, toff_t*) { return 0; }
void unmap_nothing(thandle_t, void*, toff_t) {}

// Returning 1 keeps libtiff from calling its global handler, which prints.
int keep_error(TIFF*, void* user_data, const char*, const char* format, va_list arguments) {
  char text[512];
  // NOLINTNEXTLINE(clang-analyzer-valist.Uninitialized): the list comes initialised from libtiff
  std::vsnprintf(text, sizeof(text), format, arguments);
  static_cast<TiffHandle::Client*>(user_data)->complain(text);
  return 1;
}

int drop_warning(TIFF*, void*, const char*, const char*, va_list) { return 1; }

}  // namespace

TiffHandle::TiffHandle(std::shared_ptr<const ReadFile> file) : client_(std::make_unique<Client>()) {
  client_->path = file->path();
  client_->descriptor = file->descriptor();
  client_->input = std::move(file);
  open("rhm");  // h: load no directory; m: do not map
  if (tiff_ == nullptr) refuse_input("{}: cannot be opened as TIFF ({})", client_->path, take_error());
}

TiffHandle::TiffHandle(AtomicFile& file, bool big_tiff) : client_(std::make_unique<Client>()) {
  client_->path = file.path();
  client_->output = &file;
  open(big_tiff ? "w8" : "w4");
  if (tiff_ == nullptr) refuse_output("{}: cannot be written as TIFF ({})", client_->path, take_error());
}

TiffHandle::~TiffHandle() { close(); }

void TiffHandle::open(const char* mode) {
  const std::unique_ptr<TIFFOpenOptions, decltype(&TIFFOpenOptionsFree)> options(TIFFOpenOptionsAlloc(),
                                                                                 &TIFFOpenOptionsFree);
  TIFFOpenOptionsSetErrorHandlerExtR(options.get(), keep_error, client_.get());
  TIFFOpenOptionsSetWarningHandlerExtR(options.get(), drop_warning, nullptr);
  tiff_ = TIFFClientOpenExt(client_->path.c_str(), mode, client_.get(), read_bytes, write_bytes, seek, close_nothing,
                            size_of, map_nothing, unmap_nothing, options.get());
}

TIFF* TiffHandle::get() const noexcept { return tiff_; }

std::string TiffHandle::take_error() {
  std::string error = std::exchange(client_->error, {});
  return error.empty() ? "unknown reason" : error;
}

bool TiffHandle::has_error() const noexcept { return !client_->error.empty(); }

void TiffHandle::close() {
  if (tiff_ == nullptr) return;
  TIFFClose(tiff_);
  tiff_ = nullptr;
}

}  // namespace tambour
