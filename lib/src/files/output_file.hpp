// Files that appear under their name only when whole.
#pragma once

#include <cstddef>
#include <cstdint>
#include <span>
#include <string>
#include <string_view>

namespace tambour {

/// Bytes written beside a file's place, which commit() renames into it; without that the destructor leaves nothing.
/// A name that is a device or a pipe is written directly. Throws Error(cannot_write). Not thread-safe.
class AtomicFile {
 public:
  /// `overwrite`: else an existing file is refused, now and again on commit.
  AtomicFile(std::string path, bool overwrite);
  ~AtomicFile();
  AtomicFile(const AtomicFile&) = delete;
  AtomicFile& operator=(const AtomicFile&) = delete;

  /// The final name, as given.
  const std::string& path() const noexcept { return path_; }
  const std::string& temporary_path() const noexcept { return temporary_; }
  /// End of the farthest byte written.
  std::uint64_t size() const noexcept { return size_; }

  void write(std::uint64_t offset, std::span<const std::byte> bytes);
  void append(std::span<const std::byte> bytes) { write(size_, bytes); }
  void append_text(std::string_view text) { append(std::as_bytes(std::span(text))); }
  /// Reads back; bytes never written are zero.
  void read(std::uint64_t offset, std::span<std::byte> out) const;
  void commit();

 private:
  void rename_into_place() const;

  std::string path_;
  std::string target_;  // path_ with a symbolic link followed, so that the link survives
  std::string temporary_;
  bool overwrite_;
  bool direct_ = false;
  int descriptor_ = -1;
  std::uint64_t size_ = 0;
};

}  // namespace tambour
