#include "files/read_file.hpp"

#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

#include <algorithm>
#include <atomic>
#include <cerrno>
#include <utility>

#include "files/refuse.hpp"

namespace tambour {
namespace {

// Well under the usual limit of 1024 descriptors, of which the rest of the process needs its share.
constexpr int most_kept = 128;
std::atomic<int> kept_descriptors{0};

int open_or_refuse(const std::string& path) {
  // Without O_NONBLOCK a named pipe would wait for its writer before it can be refused.
  const int number = ::open(path.c_str(), O_RDONLY | O_CLOEXEC | O_NONBLOCK);
  if (number >= 0) return number;
  if (errno == ENOENT) refuse_input("{}: there is no such file", path);
  refuse_input("{}: cannot be opened for reading ({})", path, system_reason(errno));
}

}  // namespace

ReadFile::Descriptor::~Descriptor() { ::close(number_); }

ReadFile::ReadFile(std::string path) : path_(std::move(path)) {
  auto descriptor = std::make_shared<const Descriptor>(open_or_refuse(path_));
  struct stat status {};
  if (::fstat(descriptor->number(), &status) != 0)
    refuse_input("{}: cannot be examined ({})", path_, system_reason(errno));
  if (S_ISDIR(status.st_mode)) refuse_input("{}: is a folder, not an image file", path_);
  if (!S_ISREG(status.st_mode))
    refuse_input("{}: is a pipe or a device; images are read from regular files only", path_);
  size_ = static_cast<std::uint64_t>(status.st_size);
  if (kept_descriptors.fetch_add(1) < most_kept)
    kept_ = std::move(descriptor);
  else
    kept_descriptors.fetch_sub(1);
}

ReadFile::~ReadFile() {
  if (kept_) kept_descriptors.fetch_sub(1);
}

std::shared_ptr<const ReadFile::Descriptor> ReadFile::descriptor() const {
  return kept_ ? kept_ : std::make_shared<const Descriptor>(open_or_refuse(path_));
}

void ReadFile::read(const Descriptor& descriptor, std::uint64_t offset, std::span<std::byte> out) const {
  std::size_t done = 0;
  while (done < out.size()) {
    const ssize_t count =
        ::pread(descriptor.number(), out.data() + done, out.size() - done, static_cast<off_t>(offset + done));
    if (count < 0 && errno == EINTR) continue;
    if (count < 0) refuse_input("{}: cannot be read ({})", path_, system_reason(errno));
    if (count == 0)
      refuse_input("{}: ends before byte {}, where data should be: truncated", path_, offset + out.size());
    done += static_cast<std::size_t>(count);
  }
}

std::vector<std::byte> ReadFile::head(std::size_t count) const {
  std::vector<std::byte> bytes(static_cast<std::size_t>(std::min<std::uint64_t>(count, size_)));
  read(0, bytes);
  return bytes;
}

}  // namespace tambour
