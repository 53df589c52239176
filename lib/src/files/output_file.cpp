#include "files/output_file.hpp"

#include <fcntl.h>
#include <sys/stat.h>
#include <unistd.h>

#include <algorithm>
#include <atomic>
#include <cerrno>
#include <filesystem>
#include <memory>
#include <utility>

#include "files/refuse.hpp"
#include "tambour/files.hpp"

namespace tambour {
namespace {

namespace fs = std::filesystem;

[[noreturn]] void refuse_existing(const std::string& path) {
  refuse_output("{}: exists already and overwriting was not asked for (--force in the tools)", path);
}

// A name nobody else uses, in the same folder and so in the same file system.
std::string name_beside(const fs::path& target) {
  static std::atomic<unsigned> counter{0};
  constexpr std::size_t longest = 200;  // leaves room for the additions within the usual limit of 255 bytes
  const std::string name = target.filename().string().substr(0, longest);
  return (target.parent_path() / fmt::format(".{}.{}-{}.part", name, ::getpid(), counter++)).string();
}

}  // namespace

AtomicFile::AtomicFile(std::string path, bool overwrite) : path_(std::move(path)), overwrite_(overwrite) {
  if (path_.empty()) refuse_output("the name of an output file is empty");
  std::error_code ignored;
  const fs::file_status status = fs::status(path_, ignored);
  if (fs::is_directory(status)) refuse_output("{}: is a folder", path_);
  direct_ = fs::exists(status) && !fs::is_regular_file(status);
  target_ = !direct_ && fs::is_symlink(path_, ignored) ? fs::weakly_canonical(path_, ignored).string() : path_;
  if (fs::is_regular_file(status) && !overwrite_) refuse_existing(path_);

  const std::string folder = fs::path(target_).parent_path().string();
  if (!folder.empty() && !fs::is_directory(folder, ignored))
    refuse_output("{}: cannot be made, there is no folder {}", path_, folder);
  temporary_ = direct_ ? target_ : name_beside(target_);
  const int flags = direct_ ? O_RDWR : O_RDWR | O_CREAT | O_EXCL;
  descriptor_ = ::open(temporary_.c_str(), flags | O_CLOEXEC, 0666);
  // A pipe or the standard output may be open to writing only.
  if (descriptor_ < 0 && direct_) descriptor_ = ::open(temporary_.c_str(), O_WRONLY | O_CLOEXEC);
  if (descriptor_ < 0) refuse_output("{}: cannot be made ({})", path_, system_reason(errno));
}

AtomicFile::~AtomicFile() {
  if (descriptor_ < 0) return;
  ::close(descriptor_);
  if (!direct_) ::unlink(temporary_.c_str());
}

void AtomicFile::write(std::uint64_t offset, std::span<const std::byte> bytes) {
  std::size_t done = 0;
  while (done < bytes.size()) {
    const auto place = static_cast<off_t>(offset + done);
    ssize_t count = ::pwrite(descriptor_, bytes.data() + done, bytes.size() - done, place);
    // A pipe has no places; it takes what is appended.
    if (count < 0 && errno == ESPIPE && offset == size_)
      count = ::write(descriptor_, bytes.data() + done, bytes.size() - done);
    if (count < 0 && errno == EINTR) continue;
    if (count < 0) refuse_output("{}: cannot be written ({})", path_, system_reason(errno));
    done += static_cast<std::size_t>(count);
  }
  size_ = std::max(size_, offset + bytes.size());
}

void AtomicFile::read(std::uint64_t offset, std::span<std::byte> out) const {
  std::size_t done = 0;
  while (done < out.size()) {
    const ssize_t count = ::pread(descriptor_, out.data() + done, out.size() - done, static_cast<off_t>(offset + done));
    if (count < 0 && errno == EINTR) continue;
    if (count < 0) refuse_output("{}: cannot be read back ({})", path_, system_reason(errno));
    if (count == 0) break;
    done += static_cast<std::size_t>(count);
  }
  std::fill(out.begin() + static_cast<std::ptrdiff_t>(done), out.end(), std::byte{0});
}

void AtomicFile::commit() {
  // Some file systems tell of a full disk only on closing.
  const int closed = ::close(std::exchange(descriptor_, -1));
  if (direct_) {
    if (closed != 0) refuse_output("{}: cannot be written ({})", path_, system_reason(errno));
    return;
  }
  try {
    if (closed != 0) refuse_output("{}: cannot be written ({})", path_, system_reason(errno));
    rename_into_place();
  } catch (const Error&) {
    ::unlink(temporary_.c_str());
    throw;
  }
}

void AtomicFile::rename_into_place() const {
  if (!overwrite_) {
    // A link, unlike a rename, never replaces a file that somebody else made in the meantime.
    if (::link(temporary_.c_str(), target_.c_str()) == 0) {
      ::unlink(temporary_.c_str());
      return;
    }
    if (errno == EEXIST) refuse_existing(path_);
    std::error_code ignored;
    if (fs::exists(target_, ignored)) refuse_existing(path_);
  }
  if (::rename(temporary_.c_str(), target_.c_str()) != 0)
    refuse_output("{}: cannot be renamed into its place ({})", path_, system_reason(errno));
}

struct OutputFile::State {
  State(const std::string& path, bool overwrite) : file(path, overwrite) {}

  void flush() {
    file.append_text(pending);
    pending.clear();
  }

  AtomicFile file;
  std::string pending;
};

OutputFile::OutputFile(const std::string& path, bool overwrite) : state_(std::make_unique<State>(path, overwrite)) {}

OutputFile::~OutputFile() = default;

void OutputFile::write(const std::string& text) {
  constexpr std::size_t batch = 1 << 16;
  state_->pending += text;
  if (state_->pending.size() >= batch) state_->flush();
}

void OutputFile::commit() {
  state_->flush();
  state_->file.commit();
}

const std::string& OutputFile::temporary_path() const noexcept { return state_->file.temporary_path(); }

void check_writable(const std::string& path, bool overwrite) { const AtomicFile probe(path, overwrite); }

}  // namespace tambour
